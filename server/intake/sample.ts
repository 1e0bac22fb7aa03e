import { lossyText } from './cell.ts';
import { RowScanner, type ScannedRow } from './text/row-scanner.ts';

/** A row of the beginning of a file, as text. */
export interface SampleRow {
  line: number;
  cells: string[];
  /** The row as it came. */
  raw: string;
}

/** Rows of a sample from which is guessed. */
export const sampleRowLimit = 1000;

/**
 * The first rows of a text that hold anything.
 *
 * @param text UTF-8 with line feeds
 * @param isWhole whether this is all of the file; else the last, incomplete row is left out
 * @throws IntakeFailure where a single line is longer than a row may be
 */
export function sampleRows(text: Buffer, isWhole: boolean, delimiter: string): SampleRow[] {
  const rows: SampleRow[] = [];
  new RowScanner(delimiter).scan(text, isWhole, (row) => {
    const sample = sampleRow(row);
    if (holdsAnything(sample)) rows.push(sample);
    return rows.length <= sampleRowLimit;
  });
  return rows;
}

/** A row as text. */
export const sampleRow = (row: ScannedRow): SampleRow => ({
  line: row.line,
  cells: cellsOf(row),
  raw: rawOf(row),
});

export const holdsAnything = ({ cells }: SampleRow): boolean =>
  cells.some((cell) => cell.trim() !== '');

/** The cells of a row as text; of a row whose quotation marks are out of order, the row as one cell. */
export function cellsOf(row: ScannedRow): string[] {
  if (row.trouble !== null) return [rawOf(row)];
  const kept = Math.min(row.count, row.starts.length);
  return Array.from({ length: kept }, (_, index) =>
    lossyText(row.bytes, row.starts[index] as number, row.ends[index] as number),
  );
}

/** The row as it came. */
export const rawOf = (row: ScannedRow): string => lossyText(row.raw, row.rawStart, row.rawEnd);
