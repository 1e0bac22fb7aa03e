import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { delimiters, encodings, shapes, type Encoding } from '../../shared/contracts/plan.ts';
import type { Upload } from '../../shared/contracts/uploads.ts';
import { withTenant } from '../../server/db/tenant.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { makeSite, type TestSite } from '../support/site.ts';
import {
  asDelimited,
  asWorkbook,
  asXes,
  sourceLog,
  sourceZone,
  timesAsText,
  type Dialect,
  type SheetTimes,
} from '../support/source-log.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const lowmoor = 1;

/** The stays of a site's areas in an order of their own, moments in milliseconds. */
async function staysOf(site: TestSite): Promise<unknown[]> {
  const { rows } = await withTenant(test.db, lowmoor, (tx) =>
    tx.execute(sql`/* stays of the areas */
      select
        record.job_key as job, zone.name as area,
        (extract(epoch from arrived) * 1000)::double precision as arrived,
        (extract(epoch from started) * 1000)::double precision as started,
        (extract(epoch from finished) * 1000)::double precision as finished
      from record join zone
        on zone.organisation_id = record.organisation_id
        and zone.site_id = record.site_id and zone.id = record.area_id
      where record.site_id = ${site.id}
      order by record.job_key, arrived`),
  );
  return rows;
}

/** Uploads a file into a site of its own, without a plan. */
async function loaded(
  bytes: Buffer,
  fileName: string,
): Promise<{ upload: Upload; site: TestSite }> {
  const site = await makeSite(test, { timeZone: sourceZone });
  const upload = await site.upload(bytes, undefined, fileName);
  expect(upload).toMatchObject({ status: 'loaded', account: { refused: 0, skipped: 0 } });
  expect(upload.progress.bytes).toBe(bytes.length);
  return { upload, site };
}

const texts = shapes.flatMap((shape) =>
  encodings.flatMap((encoding, turn) =>
    delimiters.map((delimiter, index) => {
      const times = Object.keys(timesAsText) as Dialect['times'][];
      const dialect: Dialect = {
        ...{ delimiter, encoding, isQuoted: (turn + index) % 2 === 0 },
        times: times[(turn + index) % times.length] ?? 'day first',
      };
      return [shape, encoding, JSON.stringify(delimiter), dialect.times, dialect] as const;
    }),
  ),
);

const sheets = shapes.flatMap((shape) =>
  (['date cells', 'date cells of 1904', 'numbers', 'text'] satisfies SheetTimes[]).map(
    (times) => [shape, times] as const,
  ),
);

describe('one log gives the very same stays', () => {
  it.each(texts)('as a row per %s in %s, cut at %s, with times as %s', async (shape, ...rest) => {
    const dialect = rest[3];
    const { upload, site } = await loaded(asDelimited(shape, dialect), 'log.csv');
    expect(upload.plan).toMatchObject({ shape, delimiter: dialect.delimiter });
    expect(await staysOf(site)).toEqual(sourceLog);
  });

  it.each(sheets)('as a workbook with a row per %s and times as %s', async (shape, times) => {
    const { upload, site } = await loaded(await asWorkbook(shape, times), 'log.xlsx');
    expect(upload.plan).toMatchObject({ shape, sheet: 'Log' });
    expect(await staysOf(site)).toEqual(sourceLog);
  });

  it.each<[Encoding]>(encodings.map((encoding) => [encoding]))(
    'as an event log in %s',
    async (encoding) => {
      const { upload, site } = await loaded(asXes(encoding), 'log.xes');
      expect(upload.plan).toMatchObject({ shape: 'event', headerLine: 0 });
      expect(await staysOf(site)).toEqual(sourceLog);
    },
  );
});

describe('a row of a file that is no text', () => {
  it('is handed out as it came: of a workbook by its row, of an event log by its event', async () => {
    const sheet = await loaded(await asWorkbook('stay', 'date cells'), 'log.xlsx');
    expect(await sheet.site.get(`/uploads/${sheet.upload.id}/rows/2`)).toMatchObject({
      header: ['Job', 'Area', 'Arrival', 'Start', 'Finish'],
      cells: [
        'J-1000',
        'Fräsen',
        ...Array.from({ length: 2 }, () => '2026-01-12T07:00:00'),
        '2026-01-12T08:00:07',
      ],
    });
    const log = await loaded(asXes('utf-8'), 'log.xes');
    expect(await log.site.get(`/uploads/${log.upload.id}/rows/1`)).toMatchObject({
      header: expect.arrayContaining(['trace concept:name']) as string[],
      cells: ['J-1000', 'Fräsen', 'schedule', '2026-01-12T07:00:00+01:00'],
    });
  });
});

describe('a file of the wrong kind', () => {
  it('is named for what it is, in the account and in the preview', async () => {
    const site = await makeSite(test);
    const page = '<html><body><table><tr><td>job</td></tr></table></body></html>';
    const upload = await site.upload(page, undefined, 'log.xls');
    expect(upload).toMatchObject({
      ...{ status: 'failed', error: 'wrong-kind' },
      errorDetail: expect.stringMatching(/^The file is an HTML page/) as string,
    });
    const answer = await site.agent
      .post(`/api/sites/${site.id}/upload-preview`)
      .attach('file', Buffer.from('PK\u0003\u0004'), 'log.xlsx')
      .expect(400);
    expect((answer.body as { detail: string }).detail).toMatch(/^The archive breaks off/);
  });
});
