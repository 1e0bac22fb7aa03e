import type { ColumnPlan, DateOrder } from '../../shared/contracts/plan.ts';
import { profileColumns } from './column-profile.ts';
import { DateOrderEvidence } from './date-order.ts';
import { readSampleByDelimiter } from './delimiter.ts';
import { IntakeFailure } from './failure.ts';
import type { GuessReason } from './found-columns.ts';
import { guessColumns } from './guess-columns.ts';
import { columnLimit } from './limits.ts';
import { readSample, type Sample, type SampleRow } from './sample.ts';
import { placeColumns, timePlaces, type StayColumnPlaces } from './shapes/stay-columns.ts';

/** The beginning of a file, and what is known of how to read it. */
export interface SampleText {
  /** UTF-8 with line feeds. */
  text: Buffer;
  /** Whether this is all of the file. */
  isWhole: boolean;
  /** The plan that the person gave, or null to have it guessed. */
  plan: ColumnPlan | null;
  /** The zone in which local times are read where no plan says one. */
  timeZone: string;
}

export interface Detection {
  header: string[];
  rows: SampleRow[];
  delimiter: string;
  /** The plan, complete but for what only the whole file can tell; null where no guess could be made. */
  plan: ColumnPlan | null;
  /** Where the plan's columns stand; null without a plan. */
  places: StayColumnPlaces | null;
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
export function detect(sampleText: SampleText): Detection {
  const sample = readInBestWay(sampleText);
  refuseHeader(sample);
  const guess = sampleText.plan ? null : guessColumns(profileColumns(sample));
  const plan = sampleText.plan ?? (guess?.columns ? planOf(guess.columns, sampleText) : null);
  const places = plan && placeColumns(plan.columns, sample.header);
  const dateOrder = plan && places && findDateOrder(plan, places, sample.rows);
  const known = dateOrder === 'unknown' || dateOrder === null ? {} : { dateOrder };
  return {
    header: sample.header,
    rows: sample.rows,
    delimiter: sample.delimiter,
    plan: plan && { ...plan, delimiter: sample.delimiter as ColumnPlan['delimiter'], ...known },
    places,
    dateOrder,
    reasons: [
      delimiterReason(sample, sampleText.plan),
      ...(guess?.reasons ?? []),
      ...dateOrderReasons(dateOrder),
    ],
    missing: guess?.missing ?? [],
  };
}

function readInBestWay({ text, isWhole, plan }: SampleText): Sample {
  return plan?.delimiter
    ? readSample(text, isWhole, plan.delimiter)
    : readSampleByDelimiter(text, isWhole, plan?.columns ?? null);
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

function planOf(columns: ColumnPlan['columns'], { timeZone }: SampleText): ColumnPlan {
  return {
    shape: 'stay',
    columns,
    timeZone,
    timeFormat: 'auto',
    unknownAreas: 'add',
    mode: 'merge',
  };
}

function findDateOrder(
  plan: ColumnPlan,
  places: StayColumnPlaces,
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

const delimiterNames: Readonly<Record<string, string>> = {
  ',': 'commas',
  ';': 'semicolons',
  '\t': 'tabs',
  '|': 'vertical bars',
};

function delimiterReason({ delimiter, header }: Sample, plan: ColumnPlan | null): GuessReason {
  const name = delimiterNames[delimiter] ?? delimiter;
  const reason = plan?.delimiter
    ? `The column plan says that ${name} divide the columns.`
    : `Cut at ${name}, the header has ${header.length} ${header.length === 1 ? 'column' : 'columns'} and the rows agree best.`;
  return { about: 'delimiter', reason };
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
