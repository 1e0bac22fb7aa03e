import {
  optionalColumns,
  timeColumns,
  type AreaColumns,
  type EventWords,
} from '../../../shared/contracts/plan.ts';
import type { PlannedColumns } from '../shapes/places.ts';
import {
  holdsTimes,
  looksLikeTimes,
  mayHoldTimes,
  mostly,
  type ColumnProfile,
} from './column-profile.ts';
import { wholeHeaderScore, wordScore } from './column-words.ts';
import {
  isTaken,
  type FoundColumns,
  type GuessedColumn,
  type GuessReason,
} from './found-columns.ts';
import { guessEvents } from './guess-event.ts';
import { guessAreaColumns } from './guess-job-columns.ts';
import { guessTimesByOrder } from './guess-times.ts';

const stayColumns = ['job', 'area', ...timeColumns, ...optionalColumns] as const;

export interface ColumnGuess {
  /** The shape of the rows and what each column holds; null where something that has to be is missing. */
  planned: (PlannedColumns & { eventWords?: EventWords }) | null;
  reasons: GuessReason[];
  /** The sentences of what could not be found. */
  missing: string[];
}

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

/**
 * Guesses what a row tells and which column holds what, by the words of the header and by what the cells
 * look like.
 */
export function guessColumns(profiles: readonly ColumnProfile[]): ColumnGuess {
  const reasons: GuessReason[] = [];
  const found = guessByWords(profiles, reasons);
  const areas = found.area ? null : guessAreaColumns(profiles, reasons);
  if (areas) return guessJobShape(profiles, found, areas, reasons);
  const events = guessEvents(profiles, found, reasons);
  if (events) return guessEventShape(profiles, found, events, reasons);
  guessTimesByOrder(profiles, found, reasons);
  guessJob(profiles, found, reasons);
  guessArea(profiles, found, reasons);
  const { job, area } = found;
  const missing = whatIsMissing(found, ['job', 'area', 'times']);
  const isWhole = missing.length === 0 && job && area;
  const columns = { job: job?.header ?? '', area: area?.header ?? '' };
  const planned = isWhole
    ? {
        shape: 'stay' as const,
        columns: { ...namesOf(found, timeColumns), ...optionalNames(found), ...columns },
      }
    : null;
  return told(planned, reasons, missing);
}

function guessJobShape(
  profiles: readonly ColumnProfile[],
  found: FoundColumns,
  areas: AreaColumns[],
  reasons: GuessReason[],
): ColumnGuess {
  for (const column of timeColumns) forget(found, column, reasons);
  const named = new Set(areas.flatMap(({ area: _, ...times }) => Object.values(times)));
  guessJob(
    profiles.filter(({ header }) => !named.has(header)),
    found,
    reasons,
  );
  const missing = whatIsMissing(found, ['job']);
  const columns = { job: found.job?.header ?? '', ...optionalNames(found) };
  return told(found.job ? { shape: 'job', columns, areas } : null, reasons, missing);
}

function guessEventShape(
  profiles: readonly ColumnProfile[],
  found: FoundColumns,
  { event, time, eventWords }: NonNullable<ReturnType<typeof guessEvents>>,
  reasons: GuessReason[],
): ColumnGuess {
  for (const column of timeColumns) forget(found, column, reasons);
  for (const [column, profile] of Object.entries(found) as [GuessedColumn, ColumnProfile][]) {
    if (profile === event || profile === time) forget(found, column, reasons);
  }
  Object.assign(found, { event, time });
  guessJob(profiles, found, reasons);
  guessArea(profiles, found, reasons);
  const { job, area } = found;
  const missing = whatIsMissing(found, ['job', 'area']);
  if (!job || !area) return told(null, reasons, missing);
  const columns = {
    ...{ job: job.header, area: area.header, event: event.header, time: time.header },
    ...optionalNames(found),
  };
  return told({ shape: 'event', columns, eventWords }, reasons, missing);
}

function told(
  planned: ColumnGuess['planned'],
  reasons: GuessReason[],
  missing: readonly GuessReason[],
): ColumnGuess {
  return {
    planned,
    reasons: [...reasons, ...missing],
    missing: missing.map(({ reason }) => reason),
  };
}

/** Takes back what the words of a header seemed to say, with its reason. */
function forget(found: FoundColumns, column: GuessedColumn, reasons: GuessReason[]): void {
  if (!found[column]) return;
  delete found[column];
  const at = reasons.findIndex(({ about }) => about === column);
  if (at >= 0) reasons.splice(at, 1);
}

function namesOf<Column extends GuessedColumn>(
  found: FoundColumns,
  columns: readonly Column[],
): Partial<Record<Column, string>> {
  const names = columns.flatMap((column) => {
    const profile = found[column];
    return profile ? [[column, profile.header]] : [];
  });
  return Object.fromEntries(names) as Partial<Record<Column, string>>;
}

const optionalNames = (found: FoundColumns) => namesOf(found, optionalColumns);

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

const sought = {
  job: 'No column could be found that holds the job.',
  area: 'No column could be found that holds the area.',
  times: 'No column could be found that holds the arrival, the start or the finish.',
} as const;

function whatIsMissing(
  found: FoundColumns,
  wanted: readonly (keyof typeof sought)[],
): GuessReason[] {
  const isFound = {
    job: found.job,
    area: found.area,
    times: found.arrived ?? found.started ?? found.finished,
  };
  return wanted
    .filter((about) => !isFound[about])
    .map((about) => ({ about, reason: sought[about] }));
}
