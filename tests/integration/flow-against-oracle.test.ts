import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { z } from 'zod';
import type { FloorLevels, readFloor } from '../../shared/contracts/figures.ts';
import { zoneRules, stepBorders } from '../../shared/local-time.ts';
import type { Series } from '../../server/flow/zone-series.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { closeTo } from '../support/close-to.ts';
import { chain, oracleFigures, staysInZone, type OracleRecord } from '../support/oracle.ts';
import { logArbitrary, asCsv, type LogRow } from '../support/random-log.ts';
import { makeSite, type TestSite } from '../support/site.ts';

/**
 * Random logs with ties, stays of no length, overlaps, open and lost finishes and returns, in zones with
 * clock changes and offsets of half hours, before 1970 too: the database's figures are those of slow,
 * obvious code.
 */
let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const settings = { infer: true, newPassAfterDays: 90 };

function chainedJobs(rows: readonly LogRow[]) {
  const jobs = new Map<string, OracleRecord[]>();
  for (const row of rows) jobs.set(row.job, [...(jobs.get(row.job) ?? []), row]);
  return [...jobs.values()].map((records) => chain(records, settings));
}

async function expectFigures(site: TestSite, rows: readonly LogRow[], timeZone: string) {
  const jobs = chainedJobs(rows);
  const areas = [...new Set(rows.map((row) => row.area))];
  const times = rows.flatMap((row) =>
    [row.arrived, row.started, row.finished].filter((at) => at !== null),
  );
  const [from, to] = [Math.min(...times) - 5_400_000, Math.max(...times) + 7_200_000];
  await expectFloor(site, from, to);
  for (const zone of await site.zones()) {
    const stays = staysInZone(jobs, zone.kind === 'site' ? areas : [zone.name]);
    await expectSteps(site, zone.id, stays, zone.dataUntil, { from, to, timeZone });
    // A window that cuts through hours.
    const cut = { from: from + 1_234_567, to: to - 2_345_678 };
    if (cut.from >= cut.to) continue;
    const summary = await site.summary(
      zone.id,
      new Date(cut.from).toISOString(),
      new Date(cut.to).toISOString(),
    );
    const expected = oracleFigures(stays, cut.from, cut.to);
    expectStep(summary, expected);
    expect(summary.wipEnd).toBe(expected.wipEnd);
    expect(summary.books.balance).toBe(true);
    const { littlesLaw } = summary;
    expect(Math.abs(littlesLaw.unexplained)).toBeLessThanOrEqual(
      1e-9 * Math.max(1, littlesLaw.wipMean),
    );
  }
}

/** The Floor says of every zone what the zone's own summary says. */
async function expectFloor(site: TestSite, from: number, to: number) {
  const asked = { from: new Date(from).toISOString(), to: new Date(to).toISOString() };
  const floor = await site.get<z.infer<typeof readFloor.response>>('/floor', asked);
  for (const row of floor.rows) {
    const summary = await site.summary(row.zone.id, floor.from, floor.to);
    for (const name of ['wipMean', 'inProcessMean', 'flowMeanSeconds', 'flowP85Seconds'] as const)
      closeTo(row[name], summary[name]);
    for (const name of ['wipStart', 'wipEnd', 'wipPeak', 'arrivals', 'departures'] as const)
      expect([name, row[name]]).toEqual([name, summary[name]]);
    closeTo(row.oldestInsideSeconds, summary.oldestInsideSeconds);
    expect(row.books).toEqual(summary.books);
  }
  const levels = await site.get<FloorLevels>('/floor/levels', asked);
  for (const { zoneId, wipMean } of levels.zones) {
    const { points } = await site.get<Series>(`/zones/${zoneId}/series`, { ...asked, step: 'day' });
    expect(points.map((point) => point.start)).toEqual(levels.borders.slice(0, -1));
    for (const [index, point] of points.entries()) closeTo(wipMean[index] ?? null, point.wipMean);
  }
}

type Expected = ReturnType<typeof oracleFigures>;

function expectStep(
  actual: Series['points'][number] | Omit<Series['points'][number], 'start' | 'end'>,
  expected: Expected,
) {
  expect({
    wipStart: actual.wipStart,
    wipPeak: actual.wipPeak,
    arrivals: actual.arrivals,
    departures: actual.departures,
  }).toEqual({
    wipStart: expected.wipStart,
    wipPeak: expected.wipPeak,
    arrivals: expected.arrivals,
    departures: expected.departures,
  });
  closeTo(actual.wipMean, expected.wipMean);
  closeTo(actual.flowMeanSeconds, expected.flowMeanSeconds);
  closeTo(actual.flowP85Seconds, expected.flowP85Seconds);
  expectAge(actual.ageMeanSeconds, expected.ageMeanSeconds);
}

/** Ages by step are carried along from step to step: right to a microsecond or so, whatever their size. */
function expectAge(actual: number | null, expected: number | null) {
  if (expected === null) expect(actual).toBeNull();
  else expect(Math.abs((actual ?? NaN) - expected)).toBeLessThan(1e-5);
}

async function expectSteps(
  site: TestSite,
  zoneId: number,
  stays: Parameters<typeof oracleFigures>[0],
  dataUntil: string | null,
  span: { from: number; to: number; timeZone: string },
) {
  const integrals: Record<string, StepIntegral[]> = {};
  for (const step of ['hour', 'day', 'week'] as const) {
    const { points } = await site.get<Series>(`/zones/${zoneId}/series`, {
      from: new Date(span.from).toISOString(),
      to: new Date(span.to).toISOString(),
      step,
    });
    const borders = stepBorders(zoneRules(span.timeZone), step, span.from, span.to);
    expect(points.map((point) => Date.parse(point.start))).toEqual(borders.slice(0, -1));
    let level: number | null = null;
    for (const point of points) {
      const [start, end] = [Date.parse(point.start), Date.parse(point.end)];
      if (dataUntil === null || start >= Date.parse(dataUntil)) {
        expect(point.wipMean).toBeNull();
        continue;
      }
      expectStep(point, oracleFigures(stays, start, end));
      // The books balance from step to step.
      if (level !== null) expect(point.wipStart).toBe(level);
      level = (point.wipStart ?? 0) + (point.arrivals ?? 0) - (point.departures ?? 0);
      (integrals[step] ??= []).push({ start, end, integral: (point.wipMean ?? 0) * (end - start) });
    }
  }
  expectToAddUp(integrals.hour ?? [], integrals.day ?? [], dataUntil);
  expectToAddUp(integrals.day ?? [], integrals.week ?? [], dataUntil);
}

interface StepIntegral {
  start: number;
  end: number;
  integral: number;
}

/** The integrals of the short steps within each long one add up to its own, as far as data speak. */
function expectToAddUp(short: StepIntegral[], long: StepIntegral[], dataUntil: string | null) {
  for (const { start, end, integral } of long) {
    const within = short.filter((each) => each.start >= start && each.end <= end);
    if (dataUntil === null || end > Date.parse(dataUntil)) continue;
    if (within[0]?.start !== start || within.at(-1)?.end !== end) continue;
    closeTo(
      within.reduce((sum, each) => sum + each.integral, 0),
      integral,
    );
  }
}

describe('figures of random logs', () => {
  it.each([
    ['Europe/Dublin', '2026-03-27T00:00:00Z'],
    ['Europe/Dublin', '2026-10-23T00:00:00Z'],
    ['Asia/Kathmandu', '2026-05-04T00:00:00Z'],
    ['Australia/Lord_Howe', '2026-04-03T12:00:00Z'],
    ['Australia/Lord_Howe', '2026-10-02T12:00:00Z'],
    ['America/New_York', '1967-04-28T00:00:00Z'],
  ])('in %s from %s are those of the oracle', async (timeZone, start) => {
    await fc.assert(
      fc.asyncProperty(logArbitrary(Date.parse(start)), async (rows) => {
        const site = await makeSite(test, { timeZone });
        const upload = await site.upload(asCsv(rows));
        expect(upload.errorDetail).toBeNull();
        expect(upload.account.new + upload.account.same).toBe(rows.length);
        await expectFigures(site, rows, timeZone);
      }),
      { numRuns: 8, seed: 20_261_201 },
    );
  });
});
