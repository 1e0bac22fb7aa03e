/** What is counted on one local day. */
export interface CountedDay {
  /** 0 to 6. */
  weekday: number;
  count: number;
  /** Not judged, and no measure for other days: a part-day, a warm-up, a day on which the whole site rested. */
  leftOut: boolean;
}

export interface FewVerdict {
  /** Median count of the weekday before; null where too few days were seen to say. */
  usual: number | null;
  isFew: boolean;
}

/** The weekday's own past: so many of its days at most, none older, and at least so many. */
const mostDays = 8;
const oldestDays = 26 * 7;
const leastDays = 4;
const unlikely = 0.001;

/**
 * Days on which so little is told that their own past makes it implausible. A day is measured by the latest
 * days of the same weekday that were not few themselves. It has too few where all of this holds: less than
 * a quarter of their median, less than on any of them (so that what comes in batches is not blamed), and
 * fewer than a Poisson count with that mean would give once in a thousand days.
 *
 * @param days consecutive, in order
 */
export function unusuallyFew(days: readonly CountedDay[]): FewVerdict[] {
  const past = Array.from({ length: 7 }, (): { index: number; count: number }[] => []);
  return days.map((day, index) => {
    const ofWeekday = past[day.weekday] ?? [];
    const base = ofWeekday
      .filter((each) => index - each.index <= oldestDays)
      .slice(-mostDays)
      .map((each) => each.count);
    const usual = base.length < leastDays ? null : median(base);
    const isFew =
      usual !== null &&
      !day.leftOut &&
      day.count < usual / 4 &&
      day.count < Math.min(...base) &&
      poissonAtMost(day.count, usual) < unlikely;
    if (!day.leftOut && !isFew) ofWeekday.push({ index, count: day.count });
    return { usual, isFew };
  });
}

/** Whether nothing at all over days on which so much is usual is implausible. */
export const isImplausibleSilence = (usual: number): boolean => Math.exp(-usual) < unlikely;

/** Stretches of so many few days, with nothing but rest between them, are more than a feast. */
const longRest = 3;

/**
 * Days in long stretches of a site's few days: whether it was closed or an export is missing, the data
 * cannot tell. A single one, or two, are taken as holidays.
 */
export function longRests(days: readonly CountedDay[], verdicts: readonly FewVerdict[]): boolean[] {
  const inLong = days.map(() => false);
  let run: number[] = [];
  const close = () => {
    if (run.length >= longRest) for (const index of run) inLong[index] = true;
    run = [];
  };
  for (const [index, day] of days.entries()) {
    if (verdicts[index]?.isFew) run.push(index);
    else if (day.count > 0) close();
  }
  close();
  return inLong;
}

/** P(X ≤ count) for a Poisson count. */
export function poissonAtMost(count: number, mean: number): number {
  let term = Math.exp(-mean);
  let sum = term;
  for (let each = 1; each <= count; each++) {
    term *= mean / each;
    sum += term;
  }
  return Math.min(1, sum);
}

function median(values: readonly number[]): number {
  const sorted = values.toSorted((one, other) => one - other);
  const middle = (sorted.length - 1) / 2;
  return ((sorted[Math.floor(middle)] ?? 0) + (sorted[Math.ceil(middle)] ?? 0)) / 2;
}
