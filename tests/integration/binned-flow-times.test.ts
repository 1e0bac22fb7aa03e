import { afterAll, beforeAll, expect, it } from 'vitest';
import { stepBorders, zoneRules } from '../../shared/local-time.ts';
import { withTenant } from '../../server/db/tenant.ts';
import { readerOfSite } from '../../server/flow/figure-zones.ts';
import { readBinnedFlowTimes } from '../../server/flow/flow-bins.ts';
import { readFlowTimes } from '../../server/flow/flow-times.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { closeTo } from '../support/close-to.ts';
import { asCsv, steadyLog } from '../support/random-log.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let test: TestApp;
let site: TestSite;
const timeZone = 'Europe/Dublin';
const rules = zoneRules(timeZone);
const start = Date.parse('2026-08-20T00:00:00Z');
beforeAll(async () => {
  test = await startTestApp();
  site = await makeSite(test, { timeZone });
  // Some 125 days, over four month ends; then a few jobs more, so that months are remade in part.
  await site.upload(asCsv(steadyLog(start, 1000)));
  await site.upload(
    asCsv(steadyLog(start + 20 * 86_400_000, 6).map((row) => ({ ...row, job: `T${row.job}` }))),
  );
});
afterAll(() => test.close());

async function both(borders: number[]) {
  const zoneIds = (await site.zones()).map((zone) => zone.id);
  return withTenant(test.db, 1, async (tx) => {
    const reader = await readerOfSite(tx, 1, site.id);
    return {
      zoneIds,
      exact: await readFlowTimes(reader, zoneIds, borders),
      binned: await readBinnedFlowTimes(reader, zoneIds, borders),
    };
  });
}

it.each([
  ['by day', 'day', '2026-08-01', '2026-09-20'],
  ['by week', 'week', '2026-07-15', '2026-10-05'],
] as const)(
  'flow times from bins %s: counts and means exact, percentiles within 1 %%',
  async (_, step, from, to) => {
    const borders = stepBorders(rules, step, Date.parse(from), Date.parse(to));
    await expectAgreement(borders);
  },
);

it.each([
  ['2026-07-01', '2026-10-01'],
  ['2026-07-20', '2026-09-20'],
  ['2026-08-03', '2026-08-09'],
  ['2026-07-15', '2026-08-14'],
])(
  'flow times from bins over one step from %s to %s agree, through whole months or not',
  async (from, to) => {
    const days = stepBorders(
      rules,
      'day',
      Date.parse(`${from}T12:00Z`),
      Date.parse(`${to}T12:00Z`),
    );
    await expectAgreement([days[0] ?? 0, days.at(-1) ?? 0]);
  },
);

async function expectAgreement(borders: number[]) {
  const { zoneIds, exact, binned } = await both(borders);
  let compared = 0;
  for (const zoneId of zoneIds)
    for (const [index, expected] of (exact.get(zoneId) ?? []).entries()) {
      const read = binned.get(zoneId)?.[index];
      expect(read?.departures).toBe(expected.departures);
      closeTo(read?.flowSum, expected.flowSum);
      closeTo(read?.flowMean, expected.flowMean);
      closeTo(read?.queueMean, expected.queueMean);
      closeTo(read?.processMean, expected.processMean);
      // Whole hours only in this log: a rank between two of them may fall anywhere between their bins.
      for (const [place, exactly] of expected.percentiles.entries()) {
        if (exactly === null) continue;
        expect(Math.abs((read?.percentiles[place] ?? NaN) - exactly) / exactly).toBeLessThan(
          0.0101,
        );
        compared += 1;
      }
    }
  expect(compared).toBeGreaterThan(0);
}
