import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startTestApp, type TestApp } from '../support/app.ts';
import { closeTo } from '../support/close-to.ts';
import { makeSite } from '../support/site.ts';
import { referenceText } from './reference-text.ts';

/** Tiny logs with exact truth; their source stands in micro-truth.json. */
interface Example {
  window: [string, string];
  integral_job_seconds: number;
  avg_wip: number;
  max_wip: number;
  arrivals: number;
  departures: number;
  wip_before_start: number;
  wip_before_end: number;
  flow_of_departures: { n: number; mean?: number; p50?: number; p85?: number; p95?: number };
  little_departures: {
    lambda_per_hour: number;
    lambda_W: number;
    residual: number;
    edge_start_before_window: number;
    edge_unfinished_at_end: number;
    W_seconds: number;
  };
  /** Left out where a job is open: its time after the window is not known. */
  little_arrivals?: { lambda_per_hour: number };
  seconds: number;
}
const truth = JSON.parse(referenceText('micro-truth.json')) as {
  examples: Record<string, Example>;
};

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

describe('a log of a few rows gives exactly its figures through the API', () => {
  it.each(Object.entries(truth.examples))('%s', async (file, expected) => {
    const site = await makeSite(test);
    const upload = await site.upload(referenceText(file));
    expect(upload).toMatchObject({ status: 'loaded', error: null });
    const bench = await site.zone('Bench');
    const [from, to] = expected.window;
    const summary = await site.summary(bench.id, from, to);
    closeTo(summary.wipMean, expected.avg_wip);
    closeTo((summary.wipMean ?? 0) * expected.seconds, expected.integral_job_seconds);
    expect(summary.wipPeak).toBe(expected.max_wip);
    expect(summary.arrivals).toBe(expected.arrivals);
    expect(summary.departures).toBe(expected.departures);
    expect(summary.wipStart).toBe(expected.wip_before_start);
    expect(summary.wipEnd).toBe(expected.wip_before_end);
    expect(summary.books.balance).toBe(true);
    const flow = expected.flow_of_departures;
    closeTo(summary.flowMeanSeconds, flow.mean ?? null);
    closeTo(summary.flowP50Seconds, flow.p50 ?? null);
    closeTo(summary.flowP85Seconds, flow.p85 ?? null);
    closeTo(summary.flowP95Seconds, flow.p95 ?? null);
    const law = summary.littlesLaw;
    const little = expected.little_departures;
    closeTo(law.wipMean, expected.avg_wip);
    closeTo(law.departureRatePerHour, little.lambda_per_hour);
    closeTo(law.arrivalRatePerHour, (expected.arrivals / expected.seconds) * 3600);
    if (expected.little_arrivals)
      closeTo(law.arrivalRatePerHour, expected.little_arrivals.lambda_per_hour);
    closeTo(law.product, little.lambda_W);
    closeTo(law.residual, little.residual);
    closeTo(law.edgeStart * expected.seconds, little.edge_start_before_window);
    closeTo(law.edgeEnd * expected.seconds, little.edge_unfinished_at_end);
    expect(Math.abs(law.unexplained)).toBeLessThanOrEqual(1e-9 * Math.max(1, law.wipMean));
    // One area: the site is the same.
    const [whole] = (await site.zones()).filter((zone) => zone.kind === 'site');
    const ofSite = await site.summary(whole?.id ?? 0, from, to);
    expect(ofSite).toMatchObject({
      wipMean: summary.wipMean,
      wipPeak: summary.wipPeak,
      flowP85Seconds: summary.flowP85Seconds,
      littlesLaw: summary.littlesLaw,
    });
  });
});

describe('degenerate files', () => {
  it.each([
    ['micro-empty.csv', /empty/i],
    ['micro-header-only.csv', /header|no rows/i],
  ])('%s gets a sentence and leaves nothing behind', async (file, sentence) => {
    const site = await makeSite(test);
    const upload = await site.upload(referenceText(file));
    expect(upload.status).toBe('failed');
    expect(upload.errorDetail).toMatch(sentence);
    expect((await site.zones()).map((zone) => zone.kind)).toEqual(['site']);
    expect(await site.get('')).toMatchObject({ busy: false, dataUntil: null });
  });

  it('a single row is one stay of an hour', async () => {
    const site = await makeSite(test);
    await site.upload(referenceText('micro-single-row.csv'));
    const { id } = await site.zone('Bench');
    const summary = await site.summary(id, '2026-01-05T00:00:00Z', '2026-01-05T02:00:00Z');
    expect(summary).toMatchObject({
      wipMean: 0.5,
      wipPeak: 1,
      arrivals: 1,
      departures: 1,
      flowMeanSeconds: 3600,
    });
  });

  it('a stay of no length comes and goes and is never inside', async () => {
    const site = await makeSite(test);
    await site.upload(referenceText('micro-single-zero.csv'));
    const { id } = await site.zone('Bench');
    const summary = await site.summary(id, '2026-01-05T00:00:00Z', '2026-01-05T01:00:00Z');
    expect(summary).toMatchObject({
      wipMean: 0,
      wipPeak: 0,
      arrivals: 1,
      departures: 1,
      flowMeanSeconds: 0,
    });
    const inside = await site.get<{ total: number }>(`/zones/${id}/inside`, {
      at: '2026-01-05T00:00:00Z',
    });
    expect(inside.total).toBe(0);
  });

  it('a quoted file without a last line break is read whole', async () => {
    const site = await makeSite(test);
    await site.upload(referenceText('micro-no-final-newline-quoted.csv'));
    const { id } = await site.zone('Bench, north');
    const summary = await site.summary(id, '2026-01-05T00:00:00Z', '2026-01-05T02:00:00Z');
    closeTo((summary.wipMean ?? 0) * 7200, 5400);
  });

  it('offsets of whole and half hours and fractions of a second are exact', async () => {
    const site = await makeSite(test);
    await site.upload(referenceText('micro-offsets.csv'));
    const { id } = await site.zone('Bench');
    const summary = await site.summary(id, '2026-01-04T23:00:00Z', '2026-01-05T01:00:00Z');
    closeTo((summary.wipMean ?? 0) * 7200, 7200.5);
    expect(summary.wipPeak).toBe(2);
    const flows = await Promise.all(
      ['M1', 'M2', 'M3'].map(async (job) => {
        const found = await site.get<{ records: { flowSeconds: number }[] }>(`/jobs/${job}`);
        return found.records[0]?.flowSeconds;
      }),
    );
    expect(flows).toEqual([0, 3600.5, 3600]);
  });
});
