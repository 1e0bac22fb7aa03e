import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import type { UploadPreview } from '../../shared/contracts/uploads.ts';
import { rowReasonSentence } from '../../shared/row-reasons.ts';
import { decodeBlock, recogniseText } from './decode.ts';
import { detect, type Detection } from './detect.ts';
import { sampleBytes } from './limits.ts';
import { readingOf, stayRowOf, type RowContext } from './reading.ts';
import { warningsOf } from './row-account.ts';
import { RowScanner, type ScannedRow } from './row-scanner.ts';
import { cellsOf } from './sample.ts';
import type { StayRow } from './shapes/stay-row.ts';

/** Rows that a preview shows. */
const rowsShown = 50;

type PreviewRow = UploadPreview['rows'][number];

export interface PreviewInput extends RowContext {
  /** The beginning of the file, or all of it where it is shorter than a sample. */
  bytes: Buffer;
  plan: ColumnPlan | null;
  timeZone: string;
}

/**
 * What would be read of a file: the guess with its reasons, and the first rows under it. Nothing is kept.
 *
 * @throws IntakeFailure where the file could not be read at all, or not by the plan
 */
export function previewOf(input: PreviewInput): UploadPreview {
  const { bytes, plan, timeZone } = input;
  const text = decodeBlock(recogniseText(bytes), Buffer.from(bytes), true);
  const isWhole = bytes.length < sampleBytes;
  const detection = detect({ text, isWhole, plan, timeZone });
  return {
    delimiter: detection.delimiter as UploadPreview['delimiter'],
    encoding: 'UTF-8',
    header: detection.header,
    plan: detection.plan,
    reasons: detection.reasons,
    rows: previewRows(detection, text, isWhole, input),
  };
}

function previewRows(
  detection: Detection,
  text: Buffer,
  isWhole: boolean,
  context: RowContext,
): PreviewRow[] {
  const stayRow = detection.plan && stayRowOf(readingShown(detection), context).stayRow;
  const rows: PreviewRow[] = [];
  let hasHeader = false;
  new RowScanner(detection.delimiter).scan(text, isWhole, (row) => {
    const cells = cellsOf(row);
    if (hasHeader) rows.push(stayRow ? judgedRow(row, stayRow, cells) : plainRow(row, cells));
    else hasHeader = cells.some((cell) => cell.trim() !== '');
    return rows.length < rowsShown;
  });
  return rows;
}

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

function judgedRow(row: ScannedRow, stayRow: StayRow, cells: string[]): PreviewRow {
  const outcome = stayRow.read(row);
  const base = { ...untold, line: row.line, cells, outcome };
  if (outcome === 'skipped') return { ...base, reason: rowReasonSentence(stayRow.skipReason) };
  if (outcome === 'refused') return { ...base, reason: stayRow.refusal?.detail ?? null };
  const instant = (index: number): string | null => {
    const micros = stayRow.times.of(index);
    return Number.isNaN(micros) ? null : new Date(Math.floor(micros / 1000)).toISOString();
  };
  return {
    ...base,
    warnings: warningsOf(stayRow.warnings),
    job: stayRow.job.text(),
    area: stayRow.area?.name ?? null,
    arrived: instant(0),
    started: instant(1),
    finished: instant(2),
  };
}
