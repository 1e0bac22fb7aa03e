import { describe, expect, it } from 'vitest';
import { littlesLaw } from '../../server/methods/littles-law.ts';

describe("Little's Law on a window", () => {
  it('explains the gap by its edges', () => {
    // Ten hours; sums in job-hours. From a hand example: integral 18, flows of those that left 8,
    // 2 spent before, 12 spent by those still inside (the identity of Kim & Whitt 2013, from memory).
    const hour = 3600;
    const law = littlesLaw({
      seconds: 10 * hour,
      levelIntegral: 18 * hour,
      arrivals: 4,
      departures: 3,
      flowSum: 8 * hour,
      beforeSum: 2 * hour,
      stillInsideSum: 12 * hour,
    });
    expect(law).toMatchObject({
      wipMean: 1.8,
      product: 0.8,
      edgeStart: 0.2,
      edgeEnd: 1.2,
      departureRatePerHour: 0.3,
    });
    expect(law.residual).toBeCloseTo(1, 12);
    expect(law.unexplained).toBeCloseTo(0, 12);
  });

  it('says nothing of a flow time where nothing left', () => {
    expect(
      littlesLaw({
        seconds: 10,
        levelIntegral: 20,
        arrivals: 0,
        departures: 0,
        flowSum: 0,
        beforeSum: 0,
        stillInsideSum: 20,
      }),
    ).toMatchObject({ flowMeanSeconds: null, product: 0, unexplained: 0 });
  });
});
