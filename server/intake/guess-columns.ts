import type { StayColumns } from '../../shared/contracts/plan.ts';
import {
  holdsTimes,
  looksLikeTimes,
  mayHoldTimes,
  mostly,
  type ColumnProfile,
} from './column-profile.ts';
import { wholeHeaderScore, wordScore } from './column-words.ts';
import { isTaken, type FoundColumns, type GuessReason } from './found-columns.ts';
import { guessTimesByOrder } from './guess-times.ts';
import { stayColumns, type StayColumn } from './shapes/stay-columns.ts';

export interface ColumnGuess {
  /** null where the job, the area or every time could not be found. */
  columns: StayColumns | null;
  reasons: GuessReason[];
  /** The sentences of what could not be found. */
  missing: string[];
}

/** What each column is called in a sentence. */
const called: Readonly<Record<StayColumn, string>> = {
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

/** Guesses which column holds what, by the words of the header and by what the cells look like. */
export function guessColumns(profiles: readonly ColumnProfile[]): ColumnGuess {
  const reasons: GuessReason[] = [];
  const found = guessByWords(profiles, reasons);
  guessTimesByOrder(profiles, found, reasons);
  guessJob(profiles, found, reasons);
  guessArea(profiles, found, reasons);
  const missing = whatIsMissing(found);
  for (const { about, reason } of missing) reasons.push({ about, reason });
  const names = Object.entries(found).map(([column, profile]) => [column, profile.header]);
  return {
    columns: missing.length === 0 ? (Object.fromEntries(names) as StayColumns) : null,
    reasons,
    missing: missing.map(({ reason }) => reason),
  };
}

function guessByWords(profiles: readonly ColumnProfile[], reasons: GuessReason[]): FoundColumns {
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
const isOnly = (profile: ColumnProfile, all: readonly ColumnProfile[]): boolean =>
  all.every((other) => other === profile || other.header !== profile.header);

/** Whether the cells of a column can be what its header says. */
function mayHold(profile: ColumnProfile, column: StayColumn, score: number): boolean {
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

function guessJob(
  profiles: readonly ColumnProfile[],
  found: FoundColumns,
  reasons: GuessReason[],
): void {
  if (found.job) return;
  const [job] = freeText(profiles, found)
    .filter(({ distinct, distinctShare }) => distinct > 1 && distinctShare >= 0.2)
    .sort((a, b) => b.distinctShare - a.distinctShare || a.place - b.place);
  if (!job) return;
  found.job = job;
  const reason = `“${job.header}” differs from row to row more than any other column, as job keys do.`;
  reasons.push({ about: 'job', reason });
}

function guessArea(
  profiles: readonly ColumnProfile[],
  found: FoundColumns,
  reasons: GuessReason[],
): void {
  if (found.area) return;
  const [area] = freeText(profiles, found)
    .filter(({ distinct, numberShare }) => distinct > 1 && distinct <= 200 && numberShare < mostly)
    .filter(({ distinctShare }) => distinctShare <= 0.5)
    .sort((a, b) => a.distinctShare - b.distinctShare || a.place - b.place);
  if (!area) return;
  found.area = area;
  const reason = `“${area.header}” holds ${area.distinct} names that come again and again, as areas do.`;
  reasons.push({ about: 'area', reason });
}

const freeText = (profiles: readonly ColumnProfile[], found: FoundColumns): ColumnProfile[] =>
  profiles.filter(
    (profile) =>
      profile.header !== '' &&
      profile.filled > 0 &&
      !holdsTimes(profile) &&
      !isTaken(found, profile) &&
      isOnly(profile, profiles),
  );

function whatIsMissing(found: FoundColumns): GuessReason[] {
  const missing: GuessReason[] = [];
  if (!found.job) {
    missing.push({ about: 'job', reason: 'No column could be found that holds the job.' });
  }
  if (!found.area) {
    missing.push({ about: 'area', reason: 'No column could be found that holds the area.' });
  }
  if (!found.arrived && !found.started && !found.finished) {
    const reason = 'No column could be found that holds the arrival, the start or the finish.';
    missing.push({ about: 'times', reason });
  }
  return missing;
}
