import { optionalColumns, timeColumns } from '../../../shared/contracts/plan.ts';
import {
  holdsTimes,
  looksLikeTimes,
  mayHoldTimes,
  mostly,
  type ColumnProfile,
} from './column-profile.ts';
import { wholeHeaderScore, wordScore } from './column-words.ts';
import { isTaken, type FoundColumns, type GuessReason } from './found-columns.ts';

const stayColumns = ['job', 'area', ...timeColumns, ...optionalColumns] as const;

/** What each column is called in a sentence. */
const called: Readonly<Record<(typeof stayColumns)[number], string>> = {
  job: 'the job',
  area: 'the area',
  arrived: 'the arrival',
  started: 'the start',
  finished: 'the finish',
  record: 'the record’s own id',
  quantity: 'the quantity',
  family: 'the product family',
  due: 'the due date',
  priority: 'the priority',
  workContent: 'the work content',
  value: 'the value',
  resource: 'the resource',
  status: 'the status',
  parent: 'the parent job',
};

/** Finds columns by the words of their headers, as far as their cells can be what these say. */
export function guessByWords(
  profiles: readonly ColumnProfile[],
  reasons: GuessReason[],
): FoundColumns {
  const named = profiles.filter((profile) => profile.header !== '' && isOnly(profile, profiles));
  const fits = named
    .flatMap((profile) =>
      stayColumns.map((column) => ({ profile, column, score: wordScore(column, profile.words) })),
    )
    .filter(({ profile, column, score }) => score > 0 && mayHold(profile, column, score))
    .sort((a, b) => b.score - a.score || a.profile.place - b.profile.place);
  const found: FoundColumns = {};
  for (const { profile, column } of fits) {
    if (found[column] || isTaken(found, profile)) continue;
    found[column] = profile;
    const reason = `“${profile.header}” is a common header for ${called[column]}.`;
    reasons.push({ about: column, reason });
  }
  return found;
}

/** A column plan names columns by their header, so a header that occurs twice cannot be chosen. */
export const isOnly = (profile: ColumnProfile, all: readonly ColumnProfile[]): boolean =>
  all.every((other) => other === profile || other.header !== profile.header);

/** Whether the cells of a column can be what its header says. */
export function mayHold(
  profile: ColumnProfile,
  column: (typeof stayColumns)[number],
  score: number,
): boolean {
  switch (column) {
    case 'arrived':
    case 'started':
    case 'finished':
    case 'due':
      return mayHoldTimes(profile) || (score >= wholeHeaderScore && looksLikeTimes(profile));
    case 'quantity':
    case 'workContent':
    case 'value':
      return profile.filled === 0 || profile.numberShare >= mostly;
    case 'record':
      return profile.filled > 0 && profile.distinctShare === 1;
    default:
      return !holdsTimes(profile);
  }
}
