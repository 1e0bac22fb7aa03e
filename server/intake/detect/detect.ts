import type { ColumnPlan, DateOrder, Delimiter, FileKind } from '../../../shared/contracts/plan.ts';
import { IntakeFailure } from '../failure.ts';
import { columnLimit } from '../limits.ts';
import type { OpenedFile } from '../opened-file.ts';
import type { SampleRow } from '../sample.ts';
import { placeColumns, timePlaces, type Places } from '../shapes/places.ts';
import { chooseCut, type Sample } from './choose-cut.ts';
import { profileColumns } from './column-profile.ts';
import { DateOrderEvidence } from './date-order.ts';
import { findDecimalSign } from './decimal-sign.ts';
import { guessEventWords, guessStatusWords } from './event-words.ts';
import type { GuessReason } from './found-columns.ts';
import { guessColumns } from './guess-columns.ts';
import { guessXes } from './guess-xes.ts';

/** What is known of how to read a file. */
export interface DetectionInput {
  file: OpenedFile;
  /** The plan that the person gave, or null to have it guessed. */
  plan: ColumnPlan | null;
  /** The zone in which local times are read where no plan says one. */
  timeZone: string;
}

export interface Detection {
  header: string[];
  headerLine: number;
  rows: SampleRow[];
  delimiter: Delimiter | null;
  /** The plan, complete but for what only the whole file can tell; null where no guess could be made. */
  plan: ColumnPlan | null;
  /** Where the plan’s columns stand; null without a plan. */
  places: Places | null;
  /** `unknown` where the beginning does not tell day and month apart; null where no date needs it. */
  dateOrder: DateOrder | 'unknown' | null;
  reasons: GuessReason[];
  missing: string[];
}

/**
 * Finds out from the beginning of a file how to read it: by the plan that was given, completed, or by a
 * guess with its reasons.
 *
 * @throws IntakeFailure where there is no header, or the given plan does not fit it
 */
export function detect({ file, plan: given, timeZone }: DetectionInput): Detection {
  const sample = chooseCut(file, given);
  refuseHeader(sample);
  const guess = given ? null : guessOf(file.kind)(profileColumns(sample));
  const base = given ?? (guess?.planned ? planOf(guess.planned, timeZone) : null);
  const places = base && placeColumns(base, sample.header);
  const dateOrder = base && places && findDateOrder(base, places, sample.rows);
  const plan = base && places && complete(base, places, sample, file, dateOrder);
  return {
    header: sample.header,
    headerLine: sample.headerLine,
    rows: sample.rows,
    delimiter: sample.cut.delimiter,
    plan,
    places,
    dateOrder,
    reasons: [
      ...fileReasons(sample, file, given),
      ...(guess?.reasons ?? []),
      ...dateOrderReasons(dateOrder),
      ...(plan?.decimalSign === ',' && !given?.decimalSign
        ? [{ about: 'decimalSign', reason: 'Numbers have a decimal comma.' }]
        : []),
    ],
    missing: guess?.missing ?? [],
  };
}

const guessOf = (kind: FileKind) => (kind === 'xes' ? guessXes : guessColumns);

/** The plan with everything that the beginning of the file tells. */
function complete(
  plan: ColumnPlan,
  places: Places,
  { cut, headerLine, rows }: Sample,
  { settled }: OpenedFile,
  dateOrder: Detection['dateOrder'],
): ColumnPlan {
  const cellsOf = (place: number | undefined): string[] =>
    place === undefined ? [] : rows.map(({ cells }) => cells[place] ?? '');
  const decimalSign = plan.decimalSign ?? findDecimalSign(places, rows);
  const statusWords = plan.statusWords ?? guessStatusWords(cellsOf(places.optional.status));
  const whole: ColumnPlan = {
    ...plan,
    ...settled,
    headerLine,
    ...(cut.delimiter ? { delimiter: cut.delimiter } : {}),
    ...(dateOrder === 'unknown' || dateOrder === null ? {} : { dateOrder }),
    ...(decimalSign ? { decimalSign } : {}),
    ...(Object.keys(statusWords).length > 0 ? { statusWords } : {}),
  };
  return whole.shape === 'event' && places.shape === 'event'
    ? { ...whole, eventWords: whole.eventWords ?? guessEventWords(cellsOf(places.event)) }
    : whole;
}

function refuseHeader({ header }: Sample): void {
  if (header.length === 0) {
    throw new IntakeFailure(
      'empty-file',
      'The file holds nothing but blank lines.',
      'Export it again and upload it.',
    );
  }
  if (header.length > columnLimit) {
    throw new IntakeFailure(
      'too-many-columns',
      `The header has more than ${columnLimit} columns.`,
      'Export fewer columns, or check the delimiter of the column plan.',
    );
  }
}

const planOf = (
  planned: NonNullable<ReturnType<typeof guessColumns>['planned']>,
  timeZone: string,
): ColumnPlan => ({
  ...planned,
  timeZone,
  timeFormat: 'auto',
  unknownAreas: 'add',
  mode: 'merge',
});

function findDateOrder(
  plan: ColumnPlan,
  places: Places,
  rows: readonly SampleRow[],
): DateOrder | 'unknown' | null {
  if (plan.timeFormat !== 'auto') return null;
  if (plan.dateOrder) return plan.dateOrder;
  const evidence = new DateOrderEvidence();
  for (const { cells } of rows) {
    for (const place of timePlaces(places)) evidence.add(cells[place] ?? '');
  }
  return evidence.order;
}

const delimiterNames: Readonly<Record<Delimiter, string>> = {
  ',': 'commas',
  ';': 'semicolons',
  '\t': 'tabs',
  '|': 'vertical bars',
};

function fileReasons(
  { cut, header, headerLine }: Sample,
  { kind, settled, sheets }: OpenedFile,
  plan: ColumnPlan | null,
): GuessReason[] {
  const reasons: GuessReason[] = [];
  const say = (about: string, reason: string): void => void reasons.push({ about, reason });
  if (cut.delimiter) {
    const name = delimiterNames[cut.delimiter];
    const width = `${header.length} ${header.length === 1 ? 'column' : 'columns'}`;
    say(
      'delimiter',
      plan?.delimiter
        ? `The column plan says that ${name} divide the columns.`
        : `Cut at ${name}, the header has ${width} and the rows agree best.`,
    );
  }
  if (settled.sheet !== undefined && sheets.length > 1) {
    say('sheet', `The workbook has ${sheets.length} sheets; “${settled.sheet}” is read.`);
  }
  if (kind !== 'xes' && headerLine === 0) {
    say(
      'headerLine',
      'The first row holds times, so the file has no header and its columns are numbered.',
    );
  }
  if (headerLine > 1) {
    say('headerLine', `The header stands on line ${headerLine}; what is above it is passed over.`);
  }
  return reasons;
}

function dateOrderReasons(order: Detection['dateOrder']): GuessReason[] {
  if (order === null) return [];
  const reason =
    order === 'unknown'
      ? 'The first dates can be read day first or month first. The whole file is asked; if it does not tell either, the reading stops and asks you.'
      : order === 'day-first'
        ? 'Dates are read day first.'
        : 'Dates are read month first.';
  return [{ about: 'dateOrder', reason }];
}
