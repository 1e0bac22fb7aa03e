import { describe, expect, it } from 'vitest';
import type { FloorRow } from '../../shared/contracts/figures.ts';
import { floorSentence } from '../../src/features/floor/sentence.ts';

const row = (kind: 'area' | 'site', name: string, given: Partial<FloorRow> = {}): FloorRow => ({
  zone: {
    id: name.length,
    kind,
    name,
    areaIds: [],
    position: 1,
    cap: null,
    servers: null,
    countsFrom: 'arrival',
    state: 'ready',
    dataFrom: null,
    dataUntil: null,
    warmUntil: null,
  },
  wipStart: 10,
  wipMean: 11,
  wipPeak: 14,
  arrivals: 40,
  departures: 39,
  throughputPerHour: 1,
  flowMeanSeconds: 3600,
  flowP50Seconds: 7200,
  flowP85Seconds: 9000,
  flowP95Seconds: 9900,
  queueMeanSeconds: null,
  processMeanSeconds: null,
  inProcessMean: null,
  wipEnd: 11,
  inProcessEnd: null,
  oldestInsideSeconds: null,
  books: { wipStart: 10, arrivals: 40, departures: 39, wipEnd: 11, balance: true },
  partial: false,
  warmingUp: false,
  ...given,
});
const end = '2026-11-30T00:00:00.000Z';
const until = (dataUntil: string): Partial<FloorRow> => ({
  zone: { ...row('site', 'Depot').zone, dataUntil },
});
const words = (rows: FloorRow[], unit: 'jobs' | 'units' = 'jobs') =>
  floorSentence(rows, unit, end)
    .map((clause) => clause.text)
    .join('');

describe('the sentence of the Floor', () => {
  it('says nothing where there are no data', () => {
    expect(words([row('site', 'Depot', { wipMean: null })])).toBe('');
  });

  it('says that no area has grown, and how the site stands', () => {
    expect(words([row('area', 'Oven'), row('site', 'Depot')])).toBe(
      'No area holds much more now than at the start. On the whole site are 11 jobs; 24.0 leave a day, and half of those that left took at most 2.0 h. ',
    );
  });

  it('tells what has grown first, the most first, each with its link', () => {
    const rows = [
      row('area', 'Oven', { wipEnd: 20, arrivals: 50, departures: 40 }),
      row('area', 'Bench', { wipEnd: 40, arrivals: 70, departures: 40 }),
      row('site', 'Depot', { wipEnd: 60 }),
    ];
    const clauses = floorSentence(rows, 'jobs', end);
    expect(clauses[0]).toEqual({
      text: 'Bench holds 40 jobs, 30 more than at the start: 70 came and 40 left. ',
      evidence: { zoneId: 5 },
    });
    expect(clauses[1]?.text).toMatch(/^Oven holds 20 jobs, 10 more/);
  });

  it('speaks of one job and one unit as one', () => {
    expect(words([row('area', 'Oven'), row('site', 'Depot', { wipEnd: 1 })])).toContain(
      'On the whole site is 1 job;',
    );
    expect(words([row('area', 'Oven'), row('site', 'Depot', { wipEnd: 1 })], 'units')).toContain(
      'is 1 unit;',
    );
  });

  it('tells books that do not balance before anything else', () => {
    const books = { wipStart: 1, arrivals: 1, departures: 1, wipEnd: 2, balance: false };
    expect(words([row('area', 'Oven', { books }), row('site', 'Depot')])).toMatch(
      /^The books of Oven do not balance/,
    );
  });

  it('says what to mind about the data', () => {
    const text = words([
      row('area', 'Oven', { warmingUp: true }),
      row('site', 'Depot', { ...until('2026-11-27T12:00:00.000Z'), flowP50Seconds: null }),
    ]);
    expect(text).toContain('none has left in this period');
    expect(text).toContain('The period reaches past what the data speak for.');
    expect(text).toContain('At its start 1 area still fills up from an empty log.');
  });

  it('keeps silent about a last day that is not whole', () => {
    const text = words([
      row('area', 'Oven'),
      row('site', 'Depot', until('2026-11-29T21:53:00.000Z')),
    ]);
    expect(text).not.toContain('reaches past');
  });

  it('tells several truths at once, the worst first', () => {
    const books = { wipStart: 1, arrivals: 1, departures: 1, wipEnd: 2, balance: false };
    const text = words([
      row('area', 'Saw', { books }),
      row('area', 'Bench', { wipEnd: 40, arrivals: 70, departures: 40 }),
      row('area', 'Oven', { warmingUp: true }),
      row('area', 'Lathe', { warmingUp: true }),
      row('site', 'Depot', { ...until('2026-11-20T00:00:00.000Z'), wipEnd: 1234 }),
    ]);
    const places = [
      'The books of Saw do not balance',
      'Bench holds 40 jobs, 30 more than at the start',
      'On the whole site are 1,234 jobs',
      'The period reaches past what the data speak for.',
      'At its start 2 areas still fill up from an empty log.',
    ].map((clause) => text.indexOf(clause));
    expect(places.every((place) => place >= 0)).toBe(true);
    expect(places).toEqual([...places].sort((one, other) => one - other));
  });
});
