import { randomBytes } from 'node:crypto';
import { createServer, request as httpRequest, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import express, { type NextFunction, type Request, type Response } from 'express';
import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { ApiError } from '../../server/errors.ts';
import { discardAbandonedReceipts } from '../../server/intake/discard-receipts.ts';
import { receiptLock } from '../../server/intake/hold-receipt.ts';
import { readOriginal } from '../../server/intake/original.ts';
import { receiveUpload } from '../../server/intake/receive-upload.ts';
import { withTenant } from '../../server/db/tenant.ts';
import { makeIntakeSite, type IntakeSite } from '../support/intake-site.ts';

const plan = {
  shape: 'stay',
  columns: { job: 'job', area: 'area', started: 'start' },
  timeZone: 'UTC',
};
const csv = 'job,area,start\nJ1,Bench,2026-01-05\n';

let site: IntakeSite;
let server: Server;
let address: string;

beforeAll(async () => {
  site = await makeIntakeSite();
  const app = express();
  app.post('/', async (req: Request, res: Response) => {
    const id = await receiveUpload(req, site.key, {
      db: site.db,
      clock: { now: () => new Date('2026-02-01T00:00:00Z') },
      actor: { kind: 'machine', accessKeyId: site.accessKeyId, ...site.key },
      limitMb: 1,
      patienceMs: Number(req.headers['x-patience-ms'] ?? 120_000),
    });
    res.status(202).json({ id });
  });
  app.use((error: unknown, _req: Request, res: Response, next: NextFunction) => {
    if (res.headersSent) next(error);
    const known = error instanceof ApiError ? error : null;
    res.status(known?.status ?? 500).json({ detail: known?.message, errors: known?.more.errors });
  });
  server = createServer(app).listen(0, '127.0.0.1');
  await new Promise((resolve) => server.once('listening', resolve));
  address = `http://127.0.0.1:${(server.address() as AddressInfo).port}/`;
});

afterAll(async () => {
  server.closeAllConnections();
  await new Promise((resolve) => server.close(resolve));
  await site.close();
});

/** What is kept of uploads, as status and number of chunks. */
async function kept(): Promise<{ status: string; chunks: number }[]> {
  const { rows } = await withTenant(site.db, site.key.organisationId, (tx) =>
    tx.execute(sql`/* kept uploads */
      select status, (
        select count(*)::integer from upload_chunk where upload_chunk.upload_id = upload.id
      ) as chunks
      from upload order by id`),
  );
  return rows as { status: string; chunks: number }[];
}

beforeEach(async () => {
  await withTenant(site.db, site.key.organisationId, (tx) =>
    tx.execute(sql`/* empty the site */ delete from upload`),
  );
});

interface Part {
  name: string;
  value: string | Blob;
  fileName?: string;
}

async function send(parts: Part[]) {
  const form = new FormData();
  for (const { name, value, fileName } of parts) {
    if (value instanceof Blob) form.append(name, value, fileName ?? 'log.csv');
    else form.append(name, value);
  }
  const answer = await fetch(address, { method: 'POST', body: form });
  const body = (await answer.json()) as {
    id?: number;
    detail?: string;
    errors?: { field: string; message: string }[];
  };
  return { status: answer.status, ...body };
}

const file = (text: string | Uint8Array<ArrayBuffer> = csv): Part => ({
  name: 'file',
  value: new Blob([text]),
});

describe('a file is received', () => {
  test('whatever the order of its parts, and waits to be read', async () => {
    const planPart = { name: 'plan', value: JSON.stringify(plan) };
    for (const parts of [[file(), planPart], [planPart, file()], [file()]]) {
      expect(await send(parts)).toMatchObject({ status: 202 });
    }
    expect(await kept()).toEqual(
      Array.from({ length: 3 }, () => ({ status: 'waiting', chunks: 1 })),
    );
  });

  test('byte by byte, whatever the bytes, with its hash, size and name', async () => {
    const bytes = new Uint8Array(900_000).map((_, index) => (index * index * 7919) % 251);
    const { id } = await send([{ ...file(bytes), fileName: 'C:\\exports\\März.csv' }]);
    const key = { ...site.key, uploadId: id ?? 0 };
    const blocks: Buffer[] = [];
    for await (const block of readOriginal(site.db, key)) blocks.push(block);
    expect(Buffer.concat(blocks).equals(Buffer.from(bytes))).toBe(true);
    const { rows } = await withTenant(site.db, site.key.organisationId, (tx) =>
      tx.execute(sql`/* receipt */ select byte_size::integer, sha256, file_name from upload`),
    );
    const digest = await crypto.subtle.digest('SHA-256', bytes);
    expect(rows).toEqual([
      { byte_size: 900_000, sha256: Buffer.from(digest).toString('hex'), file_name: 'März.csv' },
    ]);
  });

  test('and noted in the audit trail', async () => {
    const { id } = await send([file()]);
    const { rows } = await withTenant(site.db, site.key.organisationId, (tx) =>
      tx.execute(sql`/* audit */
        select action, access_key_id from audit_entry where subject_id = ${String(id)}`),
    );
    expect(rows).toEqual([{ action: 'upload.create', access_key_id: site.accessKeyId }]);
  });
});

describe('nothing is kept, and a sentence says why,', () => {
  const refused: [string, Part[], number, RegExp][] = [
    ['of a file beyond the limit', [file('x'.repeat(1_048_577))], 413, /larger than 1 MiB/],
    ['without a file', [{ name: 'plan', value: JSON.stringify(plan) }], 400, /no file/],
    ['of two files', [file(), file()], 400, /one file/i],
    ['of a file under another name', [{ ...file(), name: 'data' }], 400, /part named file/],
    ['beside an unknown part', [file(), { name: 'note', value: 'x' }], 400, /not known/],
    [
      'beside two plans',
      [file(), { name: 'plan', value: '1' }, { name: 'plan', value: '2' }],
      400,
      /one plan/,
    ],
    ['beside a plan that is no JSON', [file(), { name: 'plan', value: '{' }], 400, /plan/],
    ['beside a plan that is not saved', [file(), { name: 'plan', value: '77' }], 400, /plan/],
    [
      'beside a plan that is too long',
      [file(), { name: 'plan', value: 'x'.repeat(70_000) }],
      400,
      /64 KiB/,
    ],
  ];
  test.each(refused)('%s', async (_, parts, status, sentence) => {
    const answer = await send(parts);
    expect(answer.status).toBe(status);
    expect(answer.detail).toMatch(sentence);
    expect(await kept()).toEqual([]);
  });

  test('with all that is wrong with a plan at once', async () => {
    const wrong = {
      shape: 'stay',
      columns: { job: 'job', area: '' },
      timeZone: 'Nowhere',
      extra: 1,
    };
    const answer = await send([file(), { name: 'plan', value: JSON.stringify(wrong) }]);
    expect(answer.status).toBe(400);
    const fields = (answer.errors ?? []).map(({ field }) => field);
    expect(fields).toEqual(expect.arrayContaining(['plan.columns.area', 'plan.timeZone', 'plan']));
    expect(await kept()).toEqual([]);
  });

  test('of a time format that is none', async () => {
    const value = JSON.stringify({ ...plan, timeFormat: 'HH:mm' });
    const answer = await send([file(), { name: 'plan', value }]);
    expect(answer.errors?.[0]).toMatchObject({ field: 'plan.timeFormat' });
    expect(await kept()).toEqual([]);
  });

  const part = 'Content-Disposition: form-data; name="file"; filename="a.csv"\r\n\r\njob,area';
  test.each([
    ['that ends in the file', `--b\r\n${part}`],
    ['that ends in the header of a part', '--b\r\nContent-Disposition: form-da'],
    ['that ends after its first boundary', '--b\r\n'],
    ['whose parts have another boundary', `--c\r\n${part}\r\n--c--\r\n`],
    ['whose last boundary is another', `--b\r\n${part}\r\n--c--\r\n`],
    ['of a part without a header', `--b\r\n\r\njob,area\r\n--b--\r\n`],
    ['of a part whose header is broken', `--b\r\nContent Disposition\r\n\r\nx\r\n--b--\r\n`],
    ['of a part without a name', `--b\r\nContent-Disposition: form-data\r\n\r\nx\r\n--b--\r\n`],
    ['that is empty', '--b--\r\n'],
    ['without a byte', ''],
    ['of other bytes', '\0\x01\r\n\r\n--'],
  ])('of a form %s', async (_, body) => {
    const headers = { 'Content-Type': 'multipart/form-data; boundary=b' };
    const answer = await fetch(address, { method: 'POST', body, headers });
    expect(answer.status).toBe(400);
    expect(((await answer.json()) as { detail: string }).detail).toMatch(/^[A-Z].*\.$/);
    expect(await kept()).toEqual([]);
  });

  test('of a form that names no boundary', async () => {
    const headers = { 'Content-Type': 'multipart/form-data' };
    const answer = await fetch(address, { method: 'POST', body: `--b\r\n${part}`, headers });
    expect(answer.status).toBe(400);
    expect(await kept()).toEqual([]);
  });

  test('of a body that is no form', async () => {
    const answer = await fetch(address, { method: 'POST', body: csv });
    expect(answer.status).toBe(415);
  });

  test('of a transfer that breaks off', async () => {
    const { port } = server.address() as AddressInfo;
    const sending = httpRequest({
      port,
      method: 'POST',
      headers: { 'Content-Type': 'multipart/form-data; boundary=b', 'Content-Length': 5_000_000 },
    });
    sending.on('error', () => undefined);
    sending.write('--b\r\nContent-Disposition: form-data; name="file"; filename="a.csv"\r\n\r\n');
    sending.write('x'.repeat(400_000));
    await expect
      .poll(async () => (await kept()).map(({ status }) => status))
      .toEqual(['receiving']);
    sending.destroy();
    await expect.poll(kept).toEqual([]);
  });
});

test('a plan may be the id of a saved one of the site', async () => {
  const { rows } = await withTenant(site.db, site.key.organisationId, (tx) =>
    tx.execute(sql`/* saved plan */
      insert into column_plan (organisation_id, site_id, name, header_fingerprint, plan, saved_at)
      values (${site.key.organisationId}, ${site.key.siteId}, 'weekly', 'x', ${JSON.stringify(plan)}, now())
      returning id`),
  );
  const saved = String(rows[0]?.id);
  expect(await send([file(), { name: 'plan', value: saved }])).toMatchObject({ status: 202 });
  const given = await withTenant(site.db, site.key.organisationId, (tx) =>
    tx.execute(sql`/* plan given */ select plan_given from upload`),
  );
  expect(given.rows[0]).toMatchObject({ plan_given: plan });
});

/** Ends the connections that hold the locks of arriving files, as a lost network would. */
async function endReceivers(): Promise<void> {
  await site.db.execute(sql`/* end receivers */
    select pg_terminate_backend(pid) from pg_locks
    where locktype = 'advisory' and classid = ${receiptLock}
      and database = (select oid from pg_database where datname = current_database())`);
}

/** Sends the beginning of a form, of a file of 400 kB. */
function beginToSend(more: Record<string, string> = {}) {
  const { port } = server.address() as AddressInfo;
  const sending = httpRequest({
    port,
    method: 'POST',
    headers: { 'Content-Type': 'multipart/form-data; boundary=b', ...more },
  });
  const answered = new Promise<{ status: number | undefined; detail: string }>((resolve) => {
    sending.on('response', (answer) => {
      answer.setEncoding('utf8').on('data', (body: string) => {
        resolve({ status: answer.statusCode, ...(JSON.parse(body) as { detail: string }) });
      });
    });
  });
  sending.on('error', () => undefined);
  sending.write('--b\r\nContent-Disposition: form-data; name="file"; filename="a.csv"\r\n\r\n');
  sending.write(randomBytes(400_000));
  return { sending, answered };
}

const keptInPart = () => expect.poll(kept).toEqual([{ status: 'receiving', chunks: 1 }]);

describe('while a file arrives', () => {
  test('it is left alone, and other files come and go', async () => {
    const { sending } = beginToSend();
    await keptInPart();
    expect(await discardAbandonedReceipts(site.db)).toBe(0);
    expect(await send([file()])).toMatchObject({ status: 202 });
    expect((await kept()).map(({ status }) => status)).toEqual(['receiving', 'waiting']);
    sending.destroy();
    await expect.poll(async () => (await kept()).map(({ status }) => status)).toEqual(['waiting']);
  });

  test('a lost lock ends it with a sentence, and nothing of it is kept', async () => {
    const { sending, answered } = beginToSend();
    await keptInPart();
    await endReceivers();
    expect(await answered).toMatchObject({
      status: 503,
      detail: expect.stringMatching(/database was lost/) as string,
    });
    expect(await kept()).toEqual([]);
    sending.destroy();
    expect(await send([file()])).toMatchObject({ status: 202 });
  });

  test('a sender that stops is told so, and nothing of the file is kept', async () => {
    const { answered } = beginToSend({ 'X-Patience-Ms': '300' });
    expect(await answered).toMatchObject({
      status: 408,
      detail: 'Nothing of the file came any more. Nothing of it was kept. Send it again.',
    });
    expect(await kept()).toEqual([]);
  });

  test('one that another discarded meanwhile is not taken for received', async () => {
    const { sending, answered } = beginToSend();
    await keptInPart();
    await withTenant(site.db, site.key.organisationId, (tx) =>
      tx.execute(sql`/* as a sweep would */ delete from upload where status = 'receiving'`),
    );
    sending.end('\r\n--b--\r\n');
    expect(await answered).toMatchObject({
      status: 503,
      detail: expect.stringMatching(/lost while it arrived/) as string,
    });
    expect(await kept()).toEqual([]);
  });
});

test('a file that nobody receives any more is discarded, one that was received is not', async () => {
  await send([file()]);
  await withTenant(site.db, site.key.organisationId, (tx) =>
    tx.execute(sql`/* broken-off receipt */
      insert into upload (organisation_id, site_id, status, file_name, received_at)
      values (${site.key.organisationId}, ${site.key.siteId}, 'receiving', 'old', now())`),
  );
  expect(await discardAbandonedReceipts(site.db)).toBe(1);
  expect((await kept()).map(({ status }) => status)).toEqual(['waiting']);
});
