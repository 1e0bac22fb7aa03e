import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startTestApp, type TestApp } from '../support/app.ts';
import { asCsv, logArbitrary, type LogRow } from '../support/random-log.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const timeZone = 'Europe/Dublin';
const start = Date.parse('2026-10-23T00:00:00Z');

/** Every figure of every zone by name, and what is told of each job: ids differ from site to site. */
async function answersOf(site: TestSite, jobs: readonly string[]) {
  const query = { from: '2026-10-20T00:00:00Z', to: '2026-11-02T00:00:00Z', step: 'hour' };
  const series = await Promise.all(
    (await site.zones()).map(async (zone) => {
      const { points } = await site.get<{ points: object[] }>(`/zones/${zone.id}/series`, query);
      return [zone.kind === 'site' ? 'site' : zone.name, { dataUntil: zone.dataUntil, points }];
    }),
  );
  const paths = await Promise.all(
    jobs.map(async (job) => {
      const { records } = await site.get<{ records: Record<string, unknown>[] }>(`/jobs/${job}`);
      return records.map(({ areaName, entered, started, left, finishInferred, pass }) => ({
        ...{ job, areaName, entered, started, left, finishInferred, pass },
      }));
    }),
  );
  return { series: Object.fromEntries(series) as object, paths };
}

const jobsOf = (rows: readonly LogRow[]) => [...new Set(rows.map(({ job }) => job))].sort();

/** A log, the bits of the uploads in which each row is, and an order for the rows of each. */
const plans = fc.tuple(
  logArbitrary(start),
  fc.array(fc.integer({ min: 1, max: 15 }), { minLength: 24, maxLength: 24 }),
  fc.array(fc.integer({ min: 0, max: 1000 }), { minLength: 24, maxLength: 24 }),
);
const partsOf = ([rows, inParts, ranks]: [LogRow[], number[], number[]]): LogRow[][] =>
  [1, 2, 4, 8].map((bit) =>
    rows
      .map((row, index) => ({ row, rank: ranks[index] ?? 0, bits: inParts[index] ?? 1 }))
      .filter(({ bits }) => (bits & bit) !== 0)
      .sort((a, b) => (bit % 3 === 0 ? a.rank - b.rank : b.rank - a.rank))
      .map(({ row }) => row),
  );

describe('a log', () => {
  it('in any row order, cut into any overlapping uploads, gives the stays of the whole', async () => {
    await fc.assert(
      fc.asyncProperty(plans, async (plan) => {
        const [rows] = plan;
        const cut = await makeSite(test, { timeZone });
        for (const part of partsOf(plan)) if (part.length > 0) await cut.upload(asCsv(part));
        const whole = await makeSite(test, { timeZone });
        await whole.upload(asCsv(rows));
        const jobs = jobsOf(rows);
        const [one, other] = [await answersOf(cut, jobs), await answersOf(whole, jobs)];
        expect(one.paths).toEqual(other.paths);
      }),
      { numRuns: 12, seed: 20_261_205 },
    );
  });

  it('after any sequence of uploads and withdrawals gives the stays of those that are left', async () => {
    const steps = fc.array(
      fc.record({ withdraws: fc.boolean(), which: fc.integer({ min: 0, max: 3 }) }),
      { minLength: 3, maxLength: 9 },
    );
    await fc.assert(
      fc.asyncProperty(plans, steps, async (plan, sequence) => {
        const parts = partsOf(plan);
        const site = await makeSite(test, { timeZone });
        let standing: { id: number; part: number }[] = [];
        for (const { withdraws, which } of sequence) {
          const gone = withdraws ? standing[which % Math.max(1, standing.length)] : undefined;
          if (gone) {
            await site.withdraw(gone.id);
            standing = standing.filter((each) => each !== gone);
          } else if ((parts[which] ?? []).length > 0) {
            const { id } = await site.upload(asCsv(parts[which] ?? []));
            standing.push({ id, part: which });
          }
        }
        const fresh = await makeSite(test, { timeZone });
        for (const { part } of standing) await fresh.upload(asCsv(parts[part] ?? []));
        const jobs = jobsOf(standing.flatMap(({ part }) => parts[part] ?? []));
        expect(await answersOf(site, jobs)).toEqual(await answersOf(fresh, jobs));
        // Areas that only withdrawn uploads brought are gone with them.
        const names = async (each: TestSite) =>
          (await each.zones())
            .map(({ name, kind }) => `${kind} ${kind === 'site' ? '' : name}`)
            .sort();
        expect(await names(site)).toEqual(await names(fresh));
      }),
      { numRuns: 15, seed: 20_261_206 },
    );
  });
});
