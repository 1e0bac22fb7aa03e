import { dayMs } from '../../shared/local-time.ts';
import { trustGrades, type TrustGrade } from '../../shared/trust.ts';

/** Consecutive days that are drawn as one field: `first` to `last`, by their place. */
export interface TrustColumn {
  first: number;
  last: number;
  x: number;
  width: number;
}

/** A part of a field: of the days in it, so many have this grade; null where the area has none to tell. */
export interface TrustBand {
  grade: TrustGrade | null;
  days: number;
  /** From the top of the row, as shares of its height. */
  from: number;
  to: number;
}

/** A field narrower than this is not told apart from its neighbours. */
const leastWidth = 6;
const weekSteps = [1, 2, 4, 8, 13, 26, 52];
/** The first Monday after 1970 began on a Thursday. */
const mondayShift = 3;

/**
 * Folds days into fields that are wide enough to be seen: days, else ISO weeks, else several of them.
 *
 * @param days consecutive calendar days
 */
export function foldDays(days: readonly string[], width: number): TrustColumn[] {
  if (days.length === 0 || width <= 0) return [];
  const dayWidth = width / days.length;
  const weeks = weekSteps.find((each) => each * 7 * dayWidth >= leastWidth) ?? 104;
  const blockOf = (day: string) =>
    dayWidth >= leastWidth
      ? Date.parse(day)
      : Math.floor((Date.parse(day) / dayMs + mondayShift) / (7 * weeks));
  const columns: TrustColumn[] = [];
  for (const [index, day] of days.entries()) {
    const open = columns.at(-1);
    const previous = days[index - 1];
    if (open && previous !== undefined && blockOf(previous) === blockOf(day)) {
      open.last = index;
      open.width += dayWidth;
    } else columns.push({ first: index, last: index, x: index * dayWidth, width: dayWidth });
  }
  return columns;
}

/** What is not covered takes so much of a field at least, so that one day of many is seen. */
const leastShare = 0.25;

/** The grades of a field's days as bands, worst on top, about as high as they have days. */
export function bandsOf(grades: readonly (TrustGrade | null)[]): TrustBand[] {
  const found = [...[...trustGrades].reverse(), null]
    .map((grade) => ({ grade, days: grades.filter((each) => each === grade).length }))
    .filter(({ days }) => days > 0)
    .map((band) => ({ ...band, share: shareOf(band, grades.length) }));
  const total = found.reduce((sum, band) => sum + band.share, 0);
  let from = 0;
  return found.map(({ grade, days, share }) => {
    const band = { grade, days, from, to: from + share / total };
    from = band.to;
    return band;
  });
}

function shareOf(band: { grade: TrustGrade | null; days: number }, of: number): number {
  const isPlain = band.grade === null || band.grade === 'covered';
  return isPlain ? band.days / of : Math.max(leastShare, band.days / of);
}

const roomForLabel = 62;

/** Columns with room for their day below: none closer to the next than a label is wide. */
export function labelledColumns(columns: readonly TrustColumn[], width: number): TrustColumn[] {
  let free = 0;
  return columns.filter((column) => {
    if (column.x < free || column.x + roomForLabel > width + 30) return false;
    free = column.x + roomForLabel;
    return true;
  });
}
