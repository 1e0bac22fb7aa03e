import type { TrustCell } from '../../../shared/contracts/trust.ts';
import { trustGrades, worstGrade, type TrustGrade } from '../../../shared/trust.ts';
import { listed, plural } from '../../lib/format.ts';

/** Days of one grade in a period: on how many, and in which zones. */
export interface PoorDays {
  grade: TrustGrade;
  days: number;
  zoneIds: number[];
}

/** The grades of a period that are not covered, worst first; a day counts for the worst that any zone has. */
export function poorDays(cells: readonly TrustCell[]): { poor: PoorDays[]; days: number } {
  const worstOfDay = new Map<string, TrustGrade>();
  for (const { day, grade } of cells)
    worstOfDay.set(day, worstGrade([grade, worstOfDay.get(day) ?? 'covered']));
  const grades = [...worstOfDay.values()];
  const poor = trustGrades
    .filter((grade) => grade !== 'covered')
    .reverse()
    .map((grade) => ({
      grade,
      days: grades.filter((each) => each === grade).length,
      zoneIds: [
        ...new Set(cells.filter((cell) => cell.grade === grade).map((cell) => cell.zoneId)),
      ],
    }))
    .filter(({ days }) => days > 0);
  return { poor, days: grades.length };
}

/** The last day is a part-day as a rule: that it settles is told where it is more of the period than that. */
const isWorthTelling = ({ grade, days }: PoorDays, of: number) =>
  grade !== 'settling' || days > 1 || 4 * days >= of;

/** On how many days of a period which grade holds: `2 of 28 days are missing, 3 inferred`. Empty where none. */
export function poorDaysInWords(cells: readonly TrustCell[]): string {
  const { poor, days } = poorDays(cells);
  const [first, ...others] = poor.filter((each) => isWorthTelling(each, days));
  if (!first) return '';
  const verb = first.days === 1 ? 'is' : 'are';
  return listed([
    `${first.days} of ${plural(days, 'day')} ${verb} ${first.grade}`,
    ...others.map((each) => `${each.days} ${each.grade}`),
  ]);
}

/** The days of a period in short, worst first: `1 d missing, 2 d inferred`, or `covered`. Empty where unknown. */
export function gradesInShort(cells: readonly TrustCell[]): string {
  const { poor, days } = poorDays(cells);
  if (days === 0) return '';
  const told = poor.filter((each) => isWorthTelling(each, days));
  return told.map((each) => `${each.days} d ${each.grade}`).join(', ') || 'covered';
}
