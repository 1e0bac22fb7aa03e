import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import type { UploadPreview } from '../../shared/contracts/uploads.ts';
import { rowReasonSentence } from '../../shared/row-reasons.ts';
import { detect, type Detection } from './detect/detect.ts';
import { IntakeFailure } from './failure.ts';
import { openAndRecognise, type KnownPlan } from './detect/recognise-plan.ts';
import type { OpenedFile, Opener } from './opened-file.ts';
import { ofFile, readingOf, shapeReaderOf, type RowContext } from './reading.ts';
import { warningsOf } from './row-account.ts';
import { cellsOf } from './sample.ts';
import type { RowOutcome, ShapeReader } from './shapes/shape-reader.ts';
import type { ScannedRow } from './text/row-scanner.ts';

/** Rows that a preview shows. */
const rowsShown = 50;

type PreviewRow = UploadPreview['rows'][number];

export interface PreviewInput extends Omit<RowContext, 'dateSystem' | 'fileKind'> {
  open: Opener;
  /** Whether what can be read of the file is only its beginning. */
  isCut: boolean;
  plan: ColumnPlan | null;
  /** Plans of the site, to recognise the file by its header where no plan is given. */
  savedPlans: readonly KnownPlan[];
  timeZone: string;
}

/**
 * What would be read of a file: the guess with its reasons, and the first rows under it. Nothing is kept.
 *
 * @throws IntakeFailure where the file could not be read at all, or not by the plan
 */
export async function previewOf(input: PreviewInput): Promise<UploadPreview> {
  const { isCut, timeZone } = input;
  const opened = await openAndRecognise(input.open, input.plan, input.savedPlans, isCut);
  const { file, plan, recognised } = opened;
  const detection = detect({ file, plan, timeZone });
  return {
    fileKind: file.kind,
    delimiter: detection.delimiter,
    encoding: file.kind === 'text' ? (file.settled.encoding ?? 'utf-8') : null,
    sheets: [...file.sheets],
    header: detection.header,
    recognised: recognised && { id: recognised.id, name: recognised.name },
    plan: detection.plan,
    dateOrder: detection.dateOrder,
    reasons: [...recognisedReason(recognised), ...detection.reasons],
    words: wordsOf(detection),
    rows: await previewRows(detection, file, { ...input, ...ofFile(file) }, isCut),
  };
}

/** Words that a preview offers to be explained. */
const wordsOffered = 100;

/** The words of the event and the status column among the first rows, commonest first. */
function wordsOf({ places, rows }: Detection): UploadPreview['words'] {
  const count = (place: number | undefined) => {
    const counts = new Map<string, number>();
    for (const { cells } of place === undefined ? [] : rows) {
      const word = (cells[place ?? 0] ?? '').trim();
      if (word !== '') counts.set(word, (counts.get(word) ?? 0) + 1);
    }
    return [...counts]
      .sort((a, b) => b[1] - a[1])
      .slice(0, wordsOffered)
      .map(([word]) => word);
  };
  return {
    event: count(places?.shape === 'event' ? places.event : undefined),
    status: count(places?.optional.status),
  };
}

const recognisedReason = (plan: KnownPlan | null) =>
  plan ? [{ about: 'plan', reason: `The header is that of the column plan “${plan.name}”.` }] : [];

async function previewRows(
  detection: Detection,
  file: OpenedFile,
  context: RowContext,
  isCut: boolean,
): Promise<PreviewRow[]> {
  const shape = detection.plan && shapeReaderOf(readingShown(detection), context).shape;
  const rows: PreviewRow[] = [];
  const take = (row: ScannedRow): boolean => {
    if (row.line > detection.headerLine) {
      const cells = cellsOf(row);
      rows.push(...(shape ? judgedRows(row, shape, cells) : [plainRow(row, cells)]));
    }
    return rows.length < rowsShown;
  };
  try {
    for await (const _ of file.rows(detection, take)) if (rows.length >= rowsShown) break;
  } catch (error) {
    // Where the bytes end early, so may what they say.
    if (!(isCut && error instanceof IntakeFailure && rows.length > 0)) throw error;
  }
  return isCut && rows.length < rowsShown ? withoutLast(rows) : rows;
}

/** Without the row at which the bytes end, which may be cut. */
const withoutLast = (rows: PreviewRow[]): PreviewRow[] =>
  rows.filter(({ line }) => line !== rows.at(-1)?.line);

/** Where the whole file has yet to tell the order of day and month, rows are shown day first. */
function readingShown(detection: Detection) {
  const reading = readingOf(detection);
  return detection.dateOrder === 'unknown'
    ? { ...reading, plan: { ...reading.plan, dateOrder: 'day-first' as const } }
    : reading;
}

const untold = {
  reason: null,
  warnings: [],
  job: null,
  area: null,
  arrived: null,
  started: null,
  finished: null,
};

const plainRow = ({ line }: ScannedRow, cells: string[]): PreviewRow => ({
  line,
  cells,
  outcome: 'accepted',
  ...untold,
});

function judgedRows(row: ScannedRow, shape: ShapeReader, cells: string[]): PreviewRow[] {
  const rows: PreviewRow[] = [];
  for (let outcome: RowOutcome | null = shape.read(row); outcome; outcome = shape.next()) {
    rows.push(judged(outcome, shape, { ...untold, line: row.line, cells, outcome }));
  }
  return rows;
}

function judged(outcome: RowOutcome, shape: ShapeReader, base: PreviewRow): PreviewRow {
  if (outcome === 'skipped') return { ...base, reason: rowReasonSentence(shape.skipReason) };
  if (outcome === 'refused') return { ...base, reason: shape.refusal?.detail ?? null };
  const { job, area, ...times } = shape.told();
  return {
    ...base,
    warnings: warningsOf(shape.warnings),
    job,
    area,
    arrived: instant(times.arrived),
    started: instant(times.started),
    finished: instant(times.finished),
  };
}

const instant = (micros: number): string | null =>
  Number.isNaN(micros) ? null : new Date(Math.floor(micros / 1000)).toISOString();
