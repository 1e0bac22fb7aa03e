import { lossyText } from './cell.ts';
import { RowScanner, type ScannedRow } from './row-scanner.ts';

/** A row of the beginning of a file, as text. */
export interface SampleRow {
  line: number;
  cells: string[];
  /** The row as it came. */
  raw: string;
}

/** The beginning of a file under one delimiter. */
export interface Sample {
  delimiter: string;
  /** The first row that holds anything, its cells without blanks at their ends. */
  header: string[];
  /** Rows behind the header that hold anything else. */
  rows: SampleRow[];
}

/** Rows of a sample from which is guessed. */
const sampleRowLimit = 1000;

/**
 * Reads the beginning of a file as rows.
 *
 * @param text UTF-8 with line feeds
 * @param isWhole whether this is all of the file; else the last, incomplete row is left out
 * @throws IntakeFailure where a single line is longer than a row may be
 */
export function readSample(text: Buffer, isWhole: boolean, delimiter: string): Sample {
  const rows: SampleRow[] = [];
  new RowScanner(delimiter).scan(text, isWhole, (row) => {
    const cells = cellsOf(row);
    if (cells.some((cell) => cell.trim() !== ''))
      rows.push({ line: row.line, cells, raw: rawOf(row) });
    return rows.length <= sampleRowLimit;
  });
  const header = rows.shift()?.cells.map((cell) => cell.trim()) ?? [];
  const repeatsHeader = ({ cells }: SampleRow): boolean =>
    cells.length === header.length && cells.every((cell, index) => cell.trim() === header[index]);
  return { delimiter, header, rows: rows.filter((row) => !repeatsHeader(row)) };
}

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
