/** The recorded finishes of one area on one day, counted by how coarse their times are. */
export interface DayTimes {
  finishes: number;
  /** On a whole hour; of these, so many whose process (stay, where no start is told) took less than two. */
  onHours: number;
  briefForHours: number;
  onMinutes: number;
  /** On a whole minute, and in process for less than two. */
  briefForMinutes: number;
  /** Finishes on the three moments that carry most, and how many of these moments carry several. */
  clumped: number;
  clumps: number;
}

export const noTimes: DayTimes = {
  finishes: 0,
  onHours: 0,
  briefForHours: 0,
  onMinutes: 0,
  briefForMinutes: 0,
  clumped: 0,
  clumps: 0,
};

export type Grain = 'clumps' | 'hours' | 'minutes';

/** A day with fewer finishes is judged together with its neighbours. */
export const leastFinishesForGrain = 10;
const clumpedShare = 0.6;
const onGrainShare = 0.9;

/**
 * The grain of a day's times, where it blurs its figures; else null.
 * - `clumps`: three moments at most carry six finishes in ten, as where a shift posts its work at its end, or
 *   where only dates are told. Batches that also started together are no clumps, and are not counted here.
 * - `hours`, `minutes`: nine finishes in ten lie on whole ones, and the median process time is under two of
 *   them. A grain that is small beside the process time does no harm: whole minutes are no flaw where work
 *   takes hours.
 */
export function timeGrain(day: DayTimes): Grain | null {
  if (day.finishes < leastFinishesForGrain) return null;
  if (day.clumps > 0 && day.clumped >= clumpedShare * day.finishes) return 'clumps';
  if (day.onHours >= onGrainShare * day.finishes && day.briefForHours > day.finishes / 2)
    return 'hours';
  if (day.onMinutes >= onGrainShare * day.finishes && day.briefForMinutes > day.finishes / 2)
    return 'minutes';
  return null;
}
