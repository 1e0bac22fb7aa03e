import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startTestApp, type TestApp } from '../support/app.ts';
import { closeTo } from '../support/close-to.ts';
import { makeSite, type TestSite } from '../support/site.ts';
import { referenceText } from './reference-text.ts';

/**
 * Stanford heart transplant data: Crowley & Hu (1977), Journal of the American Statistical Association
 * 72(357), as packaged in R's survival (LGPL >= 2). A waiting list is an uncapped area. Real dates, some
 * before 1970; the truth was computed apart from this product.
 */
interface AreaTruth {
  window: [string, string];
  window_days: number;
  integral_job_days: number;
  avg_wip: number;
  max_wip: number;
  arrivals: number;
  departures_before_asof: number;
  all_finished_p50_days: number;
  all_finished_p85_days: number;
  all_finished_p95_days: number;
  little_departures: {
    lambda_per_hour: number;
    lambda_W: number;
    residual: number;
    edge_start_before_window: number;
    edge_unfinished_at_end: number;
  };
  by_year: { rows: [string, ...number[]][] };
  size_on_first_of_month: [string, number][];
}
const truth = (
  JSON.parse(referenceText('heart-waiting-list-truth.json')) as { areas: Record<string, AreaTruth> }
).areas;
const day = 86_400;

let test: TestApp;
let site: TestSite;
beforeAll(async () => {
  test = await startTestApp();
  site = await makeSite(test);
  const upload = await site.upload(referenceText('heart-waiting-list.csv'));
  expect(upload.account).toMatchObject({ rowsRead: 172, new: 172, refused: 0 });
});
afterAll(() => test.close());

describe.each(Object.entries(truth))('%s', (name, expected) => {
  it('has the published figures over all years', async () => {
    const { id } = await site.zone(name);
    const summary = await site.summary(id, ...expected.window);
    closeTo(summary.wipMean, expected.avg_wip);
    expect(summary).toMatchObject({
      wipPeak: expected.max_wip,
      arrivals: expected.arrivals,
      departures: expected.departures_before_asof,
    });
    closeTo(summary.flowP50Seconds, expected.all_finished_p50_days * day);
    closeTo(summary.flowP85Seconds, expected.all_finished_p85_days * day);
    closeTo(summary.flowP95Seconds, expected.all_finished_p95_days * day);
    const seconds = expected.window_days * day;
    const { littlesLaw } = summary;
    const little = expected.little_departures;
    closeTo(littlesLaw.departureRatePerHour, little.lambda_per_hour);
    closeTo(littlesLaw.product, little.lambda_W);
    closeTo(littlesLaw.residual, little.residual);
    closeTo(littlesLaw.edgeStart * seconds, little.edge_start_before_window);
    closeTo(littlesLaw.edgeEnd * seconds, little.edge_unfinished_at_end);
    expect(Math.abs(littlesLaw.unexplained)).toBeLessThan(1e-9 * littlesLaw.wipMean);
  });

  it('has the published figures of every year', async () => {
    const { id } = await site.zone(name);
    for (const [start, ...figures] of expected.by_year.rows) {
      const [days = 0, integral = 0, mean = 0, peak, arrivals, departures, before] = figures;
      const from = new Date(`${start}T00:00:00Z`);
      const to = new Date(from.getTime() + days * day * 1000);
      const summary = await site.summary(id, from.toISOString(), to.toISOString());
      closeTo(summary.wipMean, mean);
      closeTo(((summary.wipMean ?? 0) * days * day) / day, integral);
      expect(summary).toMatchObject({ wipPeak: peak, arrivals, departures, wipStart: before });
      const [flowMean = 0, p50 = 0, p85 = 0, p95 = 0] = figures.slice(7);
      closeTo(summary.flowMeanSeconds, flowMean * day);
      closeTo(summary.flowP50Seconds, p50 * day);
      closeTo(summary.flowP85Seconds, p85 * day);
      closeTo(summary.flowP95Seconds, p95 * day);
    }
  });

  it('has the published size on the first of every month', async () => {
    const { id } = await site.zone(name);
    for (const [month, size] of expected.size_on_first_of_month) {
      const inside = await site.get<{ total: number; stays: unknown[] }>(`/zones/${id}/inside`, {
        at: `${month}T00:00:00Z`,
      });
      expect([month, inside.total, inside.stays.length]).toEqual([month, size, size]);
    }
  });
});
