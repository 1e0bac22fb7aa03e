import { describe, expect, it } from 'vitest';
import type { Summary } from '../../shared/contracts/figures.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import { zoneSentence } from '../../src/features/zones/zone-sentence.ts';

const zone = (given: Partial<Zone> = {}): Zone => ({
  id: 1,
  kind: 'area',
  name: 'Oven',
  areaIds: [1],
  position: 1,
  cap: null,
  servers: null,
  countsFrom: 'arrival',
  state: 'ready',
  dataFrom: null,
  dataUntil: null,
  warmUntil: null,
  ...given,
});

const summary = (given: Partial<Summary> = {}): Summary => ({
  zoneId: 1,
  from: '2026-11-02T00:00:00.000Z',
  to: '2026-11-30T00:00:00.000Z',
  unit: 'jobs',
  hours: 'clock',
  wipStart: 10,
  wipMean: 11.25,
  wipPeak: 15,
  arrivals: 100,
  departures: 98,
  throughputPerHour: 1,
  flowMeanSeconds: 7200,
  flowP50Seconds: 7200,
  flowP85Seconds: 14_400,
  flowP95Seconds: 20_000,
  queueMeanSeconds: 3600,
  processMeanSeconds: 3600,
  inProcessMean: 4,
  wipEnd: 12,
  inProcessEnd: 4,
  inferredDepartures: 0,
  scrapped: 0,
  cancelled: 0,
  oldestInsideSeconds: 3600,
  ageMeanSeconds: 1800,
  utilisation: null,
  books: { wipStart: 10, arrivals: 100, departures: 98, wipEnd: 12, balance: true },
  partial: false,
  approximate: false,
  warmingUp: false,
  dataUntil: '2026-11-29T21:53:00.000Z',
  littlesLaw: {
    wipMean: 11.25,
    arrivalRatePerHour: 1,
    departureRatePerHour: 1,
    flowMeanSeconds: 7200,
    product: 11,
    residual: 0.25,
    edgeStart: 0,
    edgeEnd: 0.25,
    unexplained: 0,
  },
  trend: null,
  controlState: null,
  ...given,
});
const words = (given: Partial<Summary> = {}, of: Partial<Zone> = {}) =>
  zoneSentence(zone(of), summary(given), 'UTC');

describe('the sentence of a zone', () => {
  it('says what is inside, how that changed, and how long it takes', () => {
    expect(words()).toBe(
      'Oven holds 12 jobs, 2 more than at the start; on average 11.3 were inside. Half of those that left took at most 2.0 h, 85 of 100 at most 4.0 h.',
    );
  });

  it.each([
    [{ wipStart: 12 }, 'as many as at the start'],
    [{ wipStart: 15 }, '3 fewer than at the start'],
    [{ wipEnd: 1, wipStart: 0 }, 'holds 1 job, 1 more'],
    [{ unit: 'units' as const, wipEnd: 1 }, 'holds 1 unit,'],
    [{ unit: 'units' as const }, 'holds 12 units,'],
    [{ departures: 0 }, 'Nothing left in this period.'],
    [{ departures: 7 }, 'Only 7 left, too few for percentiles: the jobs are listed.'],
  ])('with %j says “%s”', (given, expected) => {
    expect(words(given)).toContain(expected);
  });

  it('speaks of the site as the whole site', () => {
    expect(words({}, { kind: 'site', name: 'Depot' })).toMatch(/^The whole site holds 12 jobs/);
  });

  it('says that there are no data', () => {
    expect(words({ wipMean: null })).toBe('There are no data of Oven yet.');
  });

  it('minds several things at once', () => {
    const text = words({ partial: true, warmingUp: true, approximate: true });
    expect(text).toContain(
      'The data speak until 29 Nov 2026, 21:53; after that the level is kept.',
    );
    expect(text).toContain('At its start the zone still fills up from an empty log.');
    expect(text).toContain('Percentiles are within 1 %.');
  });
});
