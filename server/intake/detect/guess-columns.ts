import {
  optionalColumns,
  timeColumns,
  type AreaColumns,
  type EventWords,
} from '../../../shared/contracts/plan.ts';
import type { PlannedColumns } from '../shapes/places.ts';
import type { ColumnProfile } from './column-profile.ts';
import type { FoundColumns, GuessedColumn, GuessReason } from './found-columns.ts';
import { guessArea, guessJob } from './guess-by-cells.ts';
import { guessByWords } from './guess-by-words.ts';
import { guessEvents } from './guess-event.ts';
import { guessAreaColumns } from './guess-job-columns.ts';
import { guessTimesByOrder } from './guess-times.ts';

export interface ColumnGuess {
  /** The shape of the rows and what each column holds; null where something that has to be is missing. */
  planned: (PlannedColumns & { eventWords?: EventWords }) | null;
  reasons: GuessReason[];
  /** The sentences of what could not be found. */
  missing: string[];
}

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
