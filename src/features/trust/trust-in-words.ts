import type { TrustCell, TrustMap } from '../../../shared/contracts/trust.ts';
import { trustGrades, worstGrade, type TrustGrade } from '../../../shared/trust.ts';
import { formatCalendarDay, formatShare, listed, plural } from '../../lib/format.ts';

const worstFirst = [...trustGrades].reverse();

/** Days by grade, worst first: `1 missing, 2 settling and 25 covered`. */
function countsInWords(grades: readonly (TrustGrade | null)[]): string {
  return listed(
    worstFirst.flatMap((grade) => {
      const days = grades.filter((each) => each === grade).length;
      return days === 0 ? [] : [`${days} ${grade}`];
    }),
  );
}

/** An area over the period: `Bench: of 28 days 1 missing and 27 covered`. */
export function rowInWords(row: { name: string; grades: readonly (TrustGrade | null)[] }): string {
  const known = row.grades.filter((grade) => grade !== null);
  return `${row.name}: of ${plural(known.length, 'day')} ${countsInWords(known)}`;
}

/**
 * A field in words: its days, their grades, and every reason once.
 *
 * @param cells those of the area
 */
export function fieldInWords(
  name: string,
  days: readonly string[],
  cells: readonly TrustCell[],
): string {
  const inField = cells.filter((cell) => days.includes(cell.day));
  const [first = '', last = ''] = [days[0], days.at(-1)];
  const when =
    first === last
      ? formatCalendarDay(first)
      : `${formatCalendarDay(first)} to ${formatCalendarDay(last)}`;
  if (inField.length === 0) return `${name}, ${when}: in use no more.`;
  const grades = inField.map((cell) => cell.grade);
  const what = days.length === 1 ? worstGrade(grades) : countsInWords(grades);
  const reasons = [
    ...new Set(inField.flatMap((cell) => cell.reasons.map((reason) => reason.text))),
  ];
  return [`${name}, ${when}: ${what}.`, ...reasons].join(' ');
}

/** A piece of the sentence, and where its evidence is: an area, the notices, or the picture itself. */
export interface TrustClause {
  text: string;
  evidence: { zoneId: number } | 'notices' | 'picture';
}

/** So many areas are named for each grade; the picture has the others. */
const mostNamed = 3;

const verbs: Record<TrustGrade, string> = {
  covered: 'is covered',
  settling: 'is settling',
  coarse: 'has coarse times',
  inferred: 'rests on inferred times',
  missing: 'misses data',
};

/** What the map says of a period, worst first: the notices, then area by area, then what is covered. */
export function trustSentence(
  { cells, notices }: TrustMap,
  areas: readonly { id: number; name: string }[],
): TrustClause[] {
  if (cells.length === 0) return [];
  const covered = cells.filter((cell) => cell.grade === 'covered').length;
  return [
    ...(notices.length === 0
      ? []
      : [
          {
            text: `${plural(notices.length, 'thing')} about the data as a whole ${notices.length === 1 ? 'needs' : 'need'} a look. `,
            evidence: 'notices' as const,
          },
        ]),
    ...worstFirst
      .filter((grade) => grade !== 'covered')
      .flatMap((grade) => clausesOf(grade, cells, areas)),
    {
      text:
        covered === cells.length
          ? `Every day of this period is covered in ${areas.length === 1 ? 'the one area' : `all ${areas.length} areas`}.`
          : `${formatShare(Math.floor((100 * covered) / cells.length) / 100)} of the areas’ days are covered.`,
      evidence: 'picture',
    },
  ];
}

function clausesOf(
  grade: TrustGrade,
  cells: readonly TrustCell[],
  areas: readonly { id: number; name: string }[],
): TrustClause[] {
  const found = areas
    .map((area) => ({
      ...area,
      days: cells
        .filter((cell) => cell.zoneId === area.id && cell.grade === grade)
        .map((cell) => cell.day),
    }))
    .filter(({ days }) => days.length > 0)
    .sort((one, other) => other.days.length - one.days.length);
  const alike = found.every(({ days }) => days.join() === found[0]?.days.join());
  const [first] = found;
  if (first && alike && found.length > 1 && found.length === areas.length)
    return [{ text: `Every area ${verbs[grade]} on ${when(first.days)}. `, evidence: 'picture' }];
  const named = found.slice(0, mostNamed).map(({ id, name, days }) => ({
    text: `${name} ${verbs[grade]} on ${when(days)}. `,
    evidence: { zoneId: id },
  }));
  const others = found.length - named.length;
  if (others === 0) return named;
  const text = `So ${others === 1 ? 'does' : 'do'} ${plural(others, 'other area')} on some days. `;
  return [...named, { text, evidence: 'picture' }];
}

/** One day by its name, several by how many and the last. */
function when(days: readonly string[]): string {
  const last = formatCalendarDay(days.at(-1) ?? '');
  return days.length === 1 ? last : `${days.length} days, the last of them ${last}`;
}
