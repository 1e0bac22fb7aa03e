import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { withTenant } from '../../server/db/tenant.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import {
  asText,
  asWorkbook,
  asXes,
  dialects,
  encoders,
  exportZone,
  sheetTimes,
  tableOf,
  type ExportShape,
  type LogStay,
} from '../support/export-writer.ts';
import { makeSite, type TestSite } from '../support/site.ts';

/**
 * One log, told in every shape, dialect, encoding and kind of file, without a column plan: what is detected
 * must give the very same stays.
 */
let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const hour = 3_600_000;
const start = Date.parse('2026-10-19T06:00:00Z');
const areas = ['Strip-down', 'Prüfstand', 'Final check'];
/** Jobs through three areas, each once; one is open, one has no length, one came and waits. */
const log: LogStay[] = Array.from({ length: 12 }, (_, index) =>
  areas.map((area, place) => {
    const arrived = start + index * 7 * hour + place * 30 * hour;
    const started = arrived + (index % 4) * hour + 61_000;
    const finished = started + (index === 3 ? 0 : (place + 1) * 2 * hour + 7000);
    return {
      job: `LM-${1000 + index}`,
      area,
      arrived: index % 3 === 0 ? null : arrived,
      started,
      finished: index === 11 && place === 2 ? null : finished,
      quantity: index % 2 === 0 ? '1.5' : '12',
    };
  }),
).flat();
log.push({
  job: 'LM-1012',
  area: 'Strip-down',
  arrived: start,
  started: null,
  finished: null,
  quantity: '1',
});

interface Told extends Omit<LogStay, 'quantity'> {
  quantity: number;
}
const inOrder = (stays: readonly Told[]): Told[] =>
  [...stays].sort((a, b) => (`${a.job} ${a.area}` < `${b.job} ${b.area}` ? -1 : 1));
const expected = inOrder(log.map((stay) => ({ ...stay, quantity: Number(stay.quantity) })));

async function staysOf(site: TestSite): Promise<Told[]> {
  const { rows } = await withTenant(test.db, 1, (tx) =>
    tx.execute(sql`/* stays told */
      select
        job_key as job, zone.name as area,
        (extract(epoch from arrived) * 1000)::double precision as arrived,
        (extract(epoch from started) * 1000)::double precision as started,
        (extract(epoch from finished) * 1000)::double precision as finished,
        quantity::double precision as quantity
      from record join zone
        on zone.organisation_id = record.organisation_id
        and zone.site_id = record.site_id and zone.id = record.area_id
      where record.site_id = ${site.id}`),
  );
  return inOrder(rows as unknown as Told[]);
}

/** Uploads a file without a plan. @returns the stays that it told */
async function staysFrom(file: Buffer, name: string): Promise<Told[]> {
  const site = await makeSite(test, { timeZone: exportZone });
  const { status, errorDetail, account } = await site.upload(file, undefined, name);
  expect({ status, errorDetail, refused: account.refused }).toEqual({
    status: 'loaded',
    errorDetail: null,
    refused: 0,
  });
  return staysOf(site);
}

const shapes: readonly ExportShape[] = ['stay', 'event', 'job'];

describe.each(shapes)('delimited text with a row per %s', (shape) => {
  describe.each(dialects)('$name', (dialect) => {
    it.each(Object.keys(encoders))('in %s tells the log', async (encoding) => {
      const text = asText(tableOf(log, shape, dialect), dialect);
      const file = encoders[encoding]?.(text) ?? Buffer.alloc(0);
      expect(await staysFrom(file, 'export.csv')).toEqual(expected);
    });
  });
});

describe.each(shapes)('a workbook with a row per %s', (shape) => {
  it.each(sheetTimes)('with times as %s tells the log', async (times) => {
    expect(await staysFrom(await asWorkbook(log, shape, times), 'export.xlsx')).toEqual(expected);
  });
});

describe('an event log in XES', () => {
  it.each([
    ['UTF-8', 'utf-8'],
    ['UTF-8 with a mark', 'utf-8'],
    ['UTF-16LE with a mark', 'utf-16'],
    ['UTF-16BE with a mark', 'utf-16'],
    ['Windows-1252', 'windows-1252'],
  ])('in %s tells the log', async (encoder, declared) => {
    const file = encoders[encoder]?.(asXes(log, declared)) ?? Buffer.alloc(0);
    expect(await staysFrom(file, 'export.xes')).toEqual(expected);
  });
});
