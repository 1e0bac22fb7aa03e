/** The invented plant of the demo: what it is, and what is planted in it for a good reader to find. */

const day = 86_400_000;
const hour = 3_600_000;

/** Monday 1 June to Sunday 29 November 2026, 22:00, in Dublin: 26 weeks. */
export const span = {
  from: Date.parse('2026-05-31T23:00:00Z'),
  until: Date.parse('2026-11-29T22:00:00Z'),
};
/** The simulation begins so much earlier, so that the plant is already at work on the first day. */
export const runUp = 14 * day;

export interface PlantArea {
  name: string;
  servers: number;
  /** Mean process time in milliseconds. */
  processMs: number;
  /** Jobs are let in only where a place is free, and wait outside until then. */
  gated?: true;
}

/** In order of flow. */
export const areas = [
  { name: 'Receiving', servers: 7, processMs: 2 * hour },
  { name: 'Strip-down', servers: 10, processMs: 3.6 * hour },
  { name: 'Cleaning', servers: 5, processMs: 1.6 * hour },
  { name: 'Repair bench', servers: 24, processMs: 10.4 * hour },
  { name: 'Burn-in', servers: 24, processMs: 11 * hour, gated: true },
  { name: 'Calibration', servers: 12, processMs: 3.2 * hour },
  { name: 'Final check', servers: 9, processMs: 2.1 * hour },
  { name: 'Dispatch', servers: 4, processMs: 1.2 * hour },
] as const satisfies readonly PlantArea[];

export type AreaName = (typeof areas)[number]['name'];

/** Jobs that come on a working day and on a day of the weekend. */
export const arrivalsPerDay = { working: 53, weekend: 42 };
/** Most jobs come in the hours of the day shift, the others spread over the rest of the day. */
export const dayShift = { from: 6 * hour, until: 18 * hour, share: 0.75 };
/** Share of jobs that fail their final check once, and go back to calibration. */
export const failingShare = 0.04;

/** From this Monday on the repair bench takes so much longer for a job that it keeps up no more. */
export const slowBench = { from: Date.parse('2026-08-02T23:00:00Z'), factor: 1.138 };

/** Chamber slots of Burn-in: never more are inside, though no cap is declared. */
export const chamberSlots = 24;

/** The cap that is agreed for Calibration and Final check together, and is overrun when calibration rests. */
export const agreedCap = {
  name: 'Calibration + Final check',
  areas: ['Calibration', 'Final check'],
  limit: 24,
  note: 'Agreed by both areas: no more than the test room holds.',
} as const;

/** Stretches in which calibration takes up no job: each drives the two areas over their cap. */
export const calibrationRests = [
  '2026-10-02T08:00Z',
  '2026-10-09T09:00Z',
  '2026-10-14T07:00Z',
  '2026-10-21T10:00Z',
  '2026-10-30T08:00Z',
  '2026-11-05T08:00Z',
  '2026-11-12T08:00Z',
  '2026-11-18T09:00Z',
  '2026-11-25T07:00Z',
].map((from) => ({ from: Date.parse(from), until: Date.parse(from) + 9.25 * hour }));

/** In this ISO week Dispatch lost finishes, which no later start can heal. */
export const lostWeek = {
  from: Date.parse('2026-09-06T23:00:00Z'),
  until: Date.parse('2026-09-13T23:00:00Z'),
  everyNth: 25,
};
