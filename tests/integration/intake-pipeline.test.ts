import { Readable } from 'node:stream';
import { parse } from 'csv-parse/sync';
import { sql } from 'drizzle-orm';
import fc from 'fast-check';
import type { PoolClient } from 'pg';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import { withTenant } from '../../server/db/tenant.ts';
import { readOriginal } from '../../server/intake/original.ts';
import { readIntoStage, type Progress, type ReadingInput } from '../../server/intake/pipeline.ts';
import { refusedCsv } from '../../server/intake/refused-csv.ts';
import { findRowOfFile } from '../../server/intake/row-of-file.ts';
import {
  findUpload,
  listUploadsOf,
  requestStop,
  requestWithdrawal,
} from '../../server/intake/site-uploads.ts';
import { presentUpload } from '../../server/intake/present-upload.ts';
import { holdReceipt } from '../../server/intake/hold-receipt.ts';
import { storeOriginal } from '../../server/intake/store-original.ts';
import { makeIntakeSite, type IntakeSite } from '../support/intake-site.ts';

let site: IntakeSite;
let client: PoolClient;
const receivedAt = new Date('2026-06-01T00:00:00Z');

beforeAll(async () => {
  site = await makeIntakeSite('Europe/Dublin');
  client = await site.db.$client.connect();
});

afterAll(async () => {
  client.release();
  await site.close();
});

/** Stores a file as if it had been received. */
async function store(file: string | Buffer): Promise<number> {
  return holdReceipt(site.db, async (held) => {
    const receipt = {
      ...site.key,
      ...held,
      fileName: 'log.csv',
      receivedAt,
      receivedBy: null,
      receivedKey: null,
    };
    await storeOriginal(site.db, receipt, Readable.from([Buffer.from(file)]));
    await withTenant(site.db, site.key.organisationId, (tx) =>
      tx.execute(
        sql`/* received */ update upload set status = 'waiting' where id = ${held.uploadId}`,
      ),
    );
    return held.uploadId;
  });
}

async function read(file: string | Buffer, more: Partial<ReadingInput> = {}) {
  const uploadId = await store(file);
  return readIntoStage(client, {
    ...site.key,
    uploadId,
    receivedAt,
    plan: null,
    site: { timeZone: 'Europe/Dublin' },
    knownAreas: new Map(),
    savedPlans: [],
    db: site.db,
    onProgress: () => Promise.resolve(true),
    ...more,
  });
}

const staged = async (columns: string): Promise<unknown[]> =>
  (await client.query(`select ${columns} from staged_row order by line`)).rows as unknown[];
const refused = async (): Promise<unknown[]> =>
  (await client.query('select line, reason, raw from staged_refused order by line'))
    .rows as unknown[];

const fullPlan: ColumnPlan = {
  shape: 'stay',
  columns: {
    job: 'Job',
    area: 'Area',
    arrived: 'In',
    started: 'Start',
    finished: 'End',
    record: 'Id',
    quantity: 'Qty',
    family: 'Family',
    due: 'Due',
    priority: 'Prio',
    workContent: 'Hours',
    value: 'Value',
    resource: 'Who',
    status: 'State',
    parent: 'Parent',
  },
  timeZone: 'Europe/Dublin',
  timeFormat: 'auto',
  unknownAreas: 'add',
  mode: 'merge',
};

describe('the stage', () => {
  test('holds every column as it was told, to the microsecond and the last digit', async () => {
    const outcome = await read(
      [
        'Id;Job;Area;In;Start;End;Qty;Family;Due;Prio;Hours;Value;Who;State;Parent',
        'r1;J1;Bench;1969-12-31T23:59:59.999999Z;2026-01-05 08:00;2026-01-05T09:00:00.123456Z;12345.6780;Fräse "B";2030-01-01;high;0.25;-99999.5;Zoë;ok;P1',
        ';J2;Bench;;2026-07-05 08:00;;;;;;;;;;',
        'r3;"J""3";Oven;;2026-01-05 08:00;;100000000;;;;0;0.00010000;;;',
      ].join('\r\n'),
      { plan: fullPlan, receivedAt: new Date('2026-08-01T00:00:00Z') },
    );
    expect(
      await staged(`line, job_key, area_number, arrived::text, started::text, finished::text,
        record_key, quantity::text, family, due::text, priority, work_content::text, value::text,
        resource, status, parent`),
    ).toEqual([
      {
        line: 2,
        job_key: 'J1',
        area_number: 0,
        arrived: '1969-12-31 23:59:59.999999+00',
        started: '2026-01-05 08:00:00+00',
        finished: '2026-01-05 09:00:00.123456+00',
        record_key: 'r1',
        quantity: '12345.6780',
        family: 'Fräse "B"',
        due: '2030-01-01 00:00:00+00',
        priority: 'high',
        work_content: '0.25',
        value: '-99999.5',
        resource: 'Zoë',
        status: 'ok',
        parent: 'P1',
      },
      {
        ...{ line: 3, job_key: 'J2', area_number: 0, arrived: null },
        ...{ started: '2026-07-05 07:00:00+00', finished: null, record_key: null, quantity: null },
        ...{ family: null, due: null, priority: null, work_content: null, value: null },
        ...{ resource: null, status: null, parent: null },
      },
      {
        ...{ line: 4, job_key: 'J"3', area_number: 1, arrived: null },
        ...{ started: '2026-01-05 08:00:00+00', finished: null, record_key: 'r3' },
        ...{ quantity: '100000000', family: null, due: null, priority: null, work_content: '0' },
        ...{ value: '0.00010000', resource: null, status: null, parent: null },
      },
    ]);
    expect(outcome.plan).toEqual({
      ...fullPlan,
      delimiter: ';',
      decimalSign: '.',
      encoding: 'utf-8',
      headerLine: 1,
    });
    expect(outcome.areas).toMatchObject([
      { number: 0, name: 'Bench', folded: 'bench', areaId: null, rows: 2 },
      { number: 1, name: 'Oven', rows: 1 },
    ]);
    expect(outcome.areas[0]?.firstAt).toEqual(new Date('1969-12-31T23:59:59.999Z'));
    expect(outcome.latestAt).toEqual(new Date('2026-07-05T07:00:00.000Z'));
  });

  test('holds numbers of any size exactly', async () => {
    const numbers = [
      ...['1', '9999', '10000', '10001', '0.1', '0.0001', '0.00001', '1000000000000', '12345678.9'],
      ...['999999999999999.999999999999999', '0.000000000000001', '20000.0002', '007', '5.', '.5'],
    ];
    const text = ['job,area,start,qty', ...numbers.map((qty, i) => `J${i},A,2026-01-05,${qty}`)];
    await read(text.join('\n'));
    const { rows } = await client.query(
      `select array_agg(quantity order by line) = $1::numeric[] as same
      from staged_row`,
      [numbers],
    );
    expect(rows).toEqual([{ same: true }]);
  });

  test('holds accepted and refused rows of a file of many lots, each once', async () => {
    const rows = Array.from({ length: 60_000 }, (_, i) =>
      i % 3 === 0 ? `,Bench,2026-01-05,${'x'.repeat(60)}` : `J${i},Area ${i % 7},2026-01-05,note`,
    );
    const seen: Progress[] = [];
    const outcome = await read(`job,area,start,note\n${rows.join('\n')}\n`, {
      onProgress: (progress) => {
        seen.push(progress);
        return Promise.resolve(true);
      },
    });
    expect(outcome.account).toMatchObject({ rowsRead: 60_000, refused: 20_000, skipped: 0 });
    const counted =
      await client.query(`select count(distinct line)::integer as lines, max(line) as last,
      count(*)::integer as rows from staged_row`);
    expect(counted.rows).toEqual([{ lines: 40_000, last: 60_001, rows: 40_000 }]);
    const kept = await client.query(
      'select count(distinct line)::integer as lines from staged_refused',
    );
    expect(kept.rows).toEqual([{ lines: 20_000 }]);
    expect(seen.length).toBeGreaterThan(1);
    expect(seen.at(-1)).toEqual({ rows: 60_000, bytes: rows.join('\n').length + 21 });
  });

  test('of an earlier reading is replaced', async () => {
    await read('job,area,start\nJ1,A,2026-01-05\n');
    await read('job,area,start\nJ2,A,2026-01-05\n,A,2026-01-05\n');
    expect(await staged('job_key')).toEqual([{ job_key: 'J2' }]);
    expect(await refused()).toEqual([{ line: 3, reason: 'missing-job', raw: ',A,2026-01-05' }]);
  });

  test('knows the areas of the site by any spelling', async () => {
    const outcome = await read('job,area,start\nJ1, BENCH ,2026-01-05\nJ2,Oven,2026-01-05\n', {
      knownAreas: new Map([['bench', 17]]),
    });
    expect(outcome.areas.map(({ areaId }) => areaId)).toEqual([17, null]);
  });
});

describe('a file that cannot be read fails with a code and a sentence:', () => {
  test.each([
    ['empty-file', '', /empty/],
    ['empty-file', '\n\n  \n', /blank lines/],
    ['header-only', 'job,area,start,finish\n', /no rows/],
    ['header-only', 'job,area,start,finish\n\n,,,\njob,area,start,finish\n', /no rows/],
    ['column-not-found', 'a,b\n1,2\n', /holds the job/],
    ['column-not-found', 'just a line of text', /column/],
    ['wrong-kind', '%PDF-1.7 and so on', /PDF/],
    ['wrong-kind', '<?xml version="1.0"?><table/>', /XML/],
    [
      'date-order-unknown',
      'job,area,start\nJ1,A,01/02/2026\nJ2,A,03/04/2026\n',
      /day first and month first/,
    ],
    ['column-twice', 'job,area,start,start\nJ1,A,2026-01-05,2026-01-05\n', /2 columns/, 'start'],
    ['no-such-column', 'job,area,begin\nJ1,A,2026-01-05\n', /none/, 'start'],
    ['too-many-columns', `job,area,start${',x'.repeat(1000)}\n`, /1000 columns/],
  ])('%s (%j)', async (code, file, sentence, started?: string) => {
    const plan = started ? { ...fullPlan, columns: { job: 'job', area: 'area', started } } : null;
    const failing = read(file, { plan });
    await expect(failing).rejects.toMatchObject({ name: 'IntakeFailure', code });
    await expect(failing).rejects.toThrow(sentence);
    await expect(failing).rejects.toThrow(/Nothing of it was kept/);
  });

  test('unsupported-encoding', async () => {
    const failing = read(Buffer.from(`${'\0'.repeat(99)}job,area,start\n`));
    await expect(failing).rejects.toMatchObject({ code: 'unsupported-encoding' });
  });

  test('too-many-areas', async () => {
    const rows = Array.from({ length: 2001 }, (_, i) => `J,Area ${i},2026-01-05`);
    const failing = read(`job,area,start\n${rows.join('\n')}`);
    await expect(failing).rejects.toMatchObject({ code: 'too-many-areas' });
  });

  test('stopped, when it is told to', async () => {
    const failing = read('job,area,start\nJ1,A,2026-01-05\n', {
      onProgress: () => Promise.resolve(false),
    });
    await expect(failing).rejects.toMatchObject({ code: 'stopped' });
  });

  test('and leaves the connection fit for the next file', async () => {
    const outcome = await read('job,area,start\nJ1,A,2026-01-05\n');
    expect(outcome.account.rowsRead).toBe(1);
  });
});

test('whatever bytes a file holds, the database takes each row as accepted or refused', async () => {
  const text = fc.oneof(
    fc.string({ unit: 'binary', maxLength: 6 }).map((each) => Buffer.from(each)),
    fc.uint8Array({ maxLength: 6 }).map((each) => Buffer.from(each)),
    fc
      .constantFrom('"', '""', '"a ""b"" c"', '\0', '\u00a0', ' x ')
      .map((each) => Buffer.from(each)),
  );
  const time = fc.constantFrom('2026-01-05', '', '46027.5', 'x').map((each) => Buffer.from(each));
  const number = fc.constantFrom('1', '', '0.25', '-1', 'x').map((each) => Buffer.from(each));
  const row = fc
    .tuple(text, text, time, time, number, text)
    .map((cells) => Buffer.concat(cells.flatMap((cell) => [cell, Buffer.from(',')]).slice(0, -1)));
  const plan: ColumnPlan = {
    ...fullPlan,
    columns: { job: 'j', area: 'a', started: 's', finished: 'f', quantity: 'q', family: 'x' },
    delimiter: ',',
  };
  await fc.assert(
    fc.asyncProperty(fc.array(row, { minLength: 1, maxLength: 12 }), async (rows) => {
      const lines = rows.flatMap((each) => [each, Buffer.from('\n')]);
      const file = Buffer.concat([Buffer.from('j,a,s,f,q,x\nfirst,A,2026-01-05,,,\n'), ...lines]);
      const { account } = await read(file, { plan });
      const counted = await client.query(`select (select count(*)::integer from staged_row) as rows,
        (select count(*)::integer from staged_refused) as refused`);
      expect(counted.rows).toEqual([
        { rows: account.rowsRead - account.skipped - account.refused, refused: account.refused },
      ]);
    }),
    { numRuns: 60 },
  );
});

test('the order of day and month is looked for beyond the beginning of the file', async () => {
  const rows = Array.from({ length: 20_000 }, (_, i) => `J${i},A,0${(i % 9) + 1}/02/2026 08:00`);
  const outcome = await read(`job,area,start\n${rows.join('\n')}\nlast,A,28/02/2026\n`);
  expect(outcome.plan.dateOrder).toBe('day-first');
  expect(outcome.account).toMatchObject({ rowsRead: 20_001, refused: 0 });
});

test('a byte order mark, mixed line ends and lone returns are no part of the text', async () => {
  await read('\ufeffjob,area,start\r\nJ1,A,2026-01-05\nJ2,A,2026-01-05\r\n');
  expect(await staged('job_key')).toEqual([{ job_key: 'J1' }, { job_key: 'J2' }]);
  const outcome = await read('job,area,start\rJ1,A,2026-01-05\r"J\r2",A,2026-01-05');
  expect(outcome.account.rowsRead).toBe(2);
  expect(outcome.account.refused).toBe(0);
});

test('a lost connection ends the reading with its error', async () => {
  const lost = await site.db.$client.connect();
  lost.on('error', () => undefined);
  const uploadId = await store(`job,area,start\n${'J,A,2026-01-05\n'.repeat(200_000)}`);
  const reading = readIntoStage(lost, {
    ...site.key,
    uploadId,
    receivedAt,
    plan: null,
    site: { timeZone: 'UTC' },
    knownAreas: new Map(),
    savedPlans: [],
    db: site.db,
    onProgress: async () => {
      const { rows } = await client.query(`select pg_terminate_backend(pid) from pg_stat_activity
        where datname = current_database() and query like '%staged_row%' and pid <> pg_backend_pid()`);
      return rows.length >= 0;
    },
  });
  await expect(reading).rejects.toThrow();
  lost.release(true);
});

describe('what is answered of an upload', () => {
  test('is a row of its file, by the line on which it begins', async () => {
    const uploadId = await store('job,area,start\nJ1,"Bench\nnorth",2026-01-05\nJ2,A,2026-01-06\n');
    const key = { ...site.key, uploadId };
    const rowAt = (line: number) => findRowOfFile(() => readOriginal(site.db, key), null, line);
    expect(await rowAt(2)).toEqual({
      header: ['job', 'area', 'start'],
      cells: ['J1', 'Bench\nnorth', '2026-01-05'],
    });
    expect(await rowAt(3)).toBeNull();
    expect((await rowAt(4))?.cells).toEqual(['J2', 'A', '2026-01-06']);
    expect(await rowAt(5)).toBeNull();
  });

  test('is its refused rows as CSV that no spreadsheet runs', async () => {
    const uploadId = await store('job,area,start\n');
    const key = { ...site.key, uploadId };
    const raw = '=cmd|"x",A,\n2026';
    await withTenant(site.db, site.key.organisationId, (tx) =>
      tx.execute(sql`/* refused */
        insert into refused_row (organisation_id, site_id, upload_id, line, reason, detail, raw)
        select ${site.key.organisationId}::integer, ${site.key.siteId}::integer, ${uploadId}::integer,
          line, 'missing-job', 'No job.', ${raw}
        from generate_series(1, 4500) as line`),
    );
    let text = '';
    for await (const part of refusedCsv(site.db, key)) text += part;
    const rows: string[][] = parse(text, { record_delimiter: '\r\n' });
    expect(rows).toHaveLength(4501);
    expect(rows[0]).toEqual(['line', 'reason', 'detail', 'row']);
    expect(rows.at(-1)).toEqual(['4500', 'missing-job', 'No job.', `'${raw}`]);
  });

  test('is its state; one that still arrives is not answered', async () => {
    const uploadId = await store('job,area,start\n');
    const key = { ...site.key, uploadId };
    const shown = presentUpload(await findUpload(site.db, key));
    expect(shown).toMatchObject({ id: uploadId, status: 'waiting', error: null, receivedBy: null });
    expect((await listUploadsOf(site.db, site.key))[0]?.id).toBe(uploadId);
    await withTenant(site.db, site.key.organisationId, (tx) =>
      tx.execute(sql`/* arriving */ update upload set status = 'receiving' where id = ${uploadId}`),
    );
    await expect(findUpload(site.db, key)).rejects.toMatchObject({ code: 'not-found' });
    await expect(findUpload(site.db, { ...key, siteId: 999 })).rejects.toMatchObject({
      code: 'not-found',
    });
  });
});

describe('a wish', () => {
  const now = new Date('2026-06-02T00:00:00Z');
  const setStatus = async (uploadId: number, status: string): Promise<void> => {
    await withTenant(site.db, site.key.organisationId, (tx) =>
      tx.execute(
        sql`/* status */ update upload set status = ${status}::upload_status where id = ${uploadId}`,
      ),
    );
  };
  const wish = (make: typeof requestStop, uploadId: number) =>
    withTenant(site.db, site.key.organisationId, (tx) => make(tx, { ...site.key, uploadId }, now));

  test('to stop ends a waiting upload at once, and is noted for one that is read', async () => {
    const uploadId = await store('job,area,start\n');
    expect(await wish(requestStop, uploadId)).toEqual({ id: uploadId, status: 'failed' });
    const stopped = presentUpload(await findUpload(site.db, { ...site.key, uploadId }));
    expect(stopped).toMatchObject({ status: 'failed', error: 'stopped' });
    await expect(wish(requestStop, uploadId)).rejects.toMatchObject({ code: 'conflict' });
    await setStatus(uploadId, 'reading');
    expect(await wish(requestStop, uploadId)).toEqual({ id: uploadId, status: 'reading' });
  });

  test('to withdraw is noted once, and refused where nothing is in the site', async () => {
    const uploadId = await store('job,area,start\n');
    await setStatus(uploadId, 'loaded');
    expect(await wish(requestWithdrawal, uploadId)).toEqual({ id: uploadId, status: 'loaded' });
    expect(await wish(requestWithdrawal, uploadId)).toEqual({ id: uploadId, status: 'loaded' });
    const shown = presentUpload(await findUpload(site.db, { ...site.key, uploadId }));
    expect(shown.withdrawing).toBe(true);
    for (const status of ['failed', 'withdrawn']) {
      await setStatus(uploadId, status);
      await expect(wish(requestWithdrawal, uploadId)).rejects.toMatchObject({ code: 'conflict' });
    }
  });
});
