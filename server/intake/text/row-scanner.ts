import { IntakeFailure } from '../failure.ts';
import { columnLimit, rowByteLimit } from '../limits.ts';
import { findRowExtent, QuotedRowParser, withoutBlanks } from './quoted-row.ts';

const quote = 0x22;
const lineFeed = 0x0a;
const carriageReturn = 0x0d;
const space = 0x20;
const tab = 0x09;

/**
 * One row of a file. The scanner hands out the same object again and again: what is to outlast the call
 * has to be copied. Cell `i` is `bytes` from `starts[i]` to before `ends[i]`, unescaped, in UTF-8.
 */
export interface ScannedRow {
  bytes: Buffer;
  readonly starts: Int32Array;
  readonly ends: Int32Array;
  /** Cells of the row; those beyond the limit on columns are counted but not kept. */
  count: number;
  /** The physical line on which the row begins, from 1. */
  line: number;
  /** The row as it came, without its line end: `raw` from `rawStart` to before `rawEnd`. */
  raw: Buffer;
  rawStart: number;
  rawEnd: number;
  /** Set where the quotation marks do not make cells; the row is then its first line alone. */
  trouble: 'malformed-quotes' | 'quote-not-closed' | null;
}

/**
 * Splits delimited text into rows and cells, block by block, in constant memory. csv-parse is the parser
 * of record: rows with doubled quotation marks or line ends in cells are split by it, and what this
 * scanner splits by itself (rows whose quoted cells hold neither) must come out the same.
 *
 * A quoted cell that is malformed, or that nothing closes within the limit on a row, makes its first line
 * a row with `trouble`; reading goes on with the line after it, so that nothing is swallowed.
 */
export class RowScanner {
  readonly row: ScannedRow;
  readonly #delimiter: number;
  readonly #quoted: QuotedRowParser;
  #line = 1;
  /** The incomplete row of the blocks before lies at its beginning; the next block is laid behind it. */
  #buffer: Buffer = Buffer.alloc(0);
  #restBytes = 0;

  /** @param delimiter one ASCII character */
  constructor(delimiter: string) {
    this.#delimiter = delimiter.charCodeAt(0);
    this.#quoted = new QuotedRowParser(delimiter);
    this.row = {
      bytes: this.#buffer,
      starts: new Int32Array(columnLimit + 1),
      ends: new Int32Array(columnLimit + 1),
      count: 0,
      line: 0,
      raw: this.#buffer,
      rawStart: 0,
      rawEnd: 0,
      trouble: null,
    };
  }

  /**
   * Takes the next block and calls `onRow` for each row that is complete; `onRow` returns false to stop.
   *
   * @param isLast whether the text ends with this block: what is left is then the last row
   * @throws IntakeFailure where a single line is longer than a row may be
   */
  scan(block: Buffer, isLast: boolean, onRow: (row: ScannedRow) => boolean | void): void {
    const bytes = this.#layBehindRest(block);
    let at = 0;
    while (at < bytes.length) {
      const next = this.#scanRow(bytes, at, isLast);
      if (next < 0) break;
      at = Math.min(next, bytes.length);
      if (onRow(this.row) === false) break;
    }
    bytes.copyWithin(0, at);
    this.#restBytes = bytes.length - at;
  }

  #layBehindRest(block: Buffer): Buffer {
    const length = this.#restBytes + block.length;
    if (length > this.#buffer.length) {
      const larger = Buffer.allocUnsafe(Math.max(length, this.#buffer.length * 2));
      this.#buffer.copy(larger, 0, 0, this.#restBytes);
      this.#buffer = larger;
    }
    block.copy(this.#buffer, this.#restBytes);
    return this.#buffer.subarray(0, length);
  }

  /** @returns where the next row begins, or -1 where this one is not complete yet */
  #scanRow(bytes: Buffer, from: number, isLast: boolean): number {
    const { starts, ends } = this.row;
    const delimiter = this.#delimiter;
    const end = bytes.length;
    let at = from;
    for (let count = 0; ; count++) {
      let start = at;
      let stop: number;
      if (bytes[at] === quote && at < end) {
        start += 1;
        stop = start;
        while (stop < end && bytes[stop] !== quote && bytes[stop] !== lineFeed) stop += 1;
        if (bytes[stop] !== quote) return this.#scanQuotedRow(bytes, from, isLast);
        at = behindReturn(bytes, stop + 1, isLast);
      } else {
        while (at < end && bytes[at] !== delimiter && bytes[at] !== lineFeed) at += 1;
        stop = at;
        if (quoteFollowsBlanks(bytes, start, stop)) {
          return this.#scanQuotedRow(bytes, from, isLast);
        }
      }
      if (count <= columnLimit) {
        starts[count] = start;
        ends[count] = stop;
      }
      if (at >= end) {
        return isLast ? this.#finishRow(bytes, from, end, count + 1) : this.#wait(bytes, from);
      }
      if (bytes[at] === lineFeed) return this.#finishRow(bytes, from, at, count + 1);
      if (bytes[at] !== delimiter) return this.#scanQuotedRow(bytes, from, isLast);
      at += 1;
    }
  }

  /** Closes a row that lies on one line and whose cells are slices of it. */
  #finishRow(bytes: Buffer, from: number, lineEnd: number, count: number): number {
    if (lineEnd - from > rowByteLimit) throw rowTooLong(this.#line);
    this.#setRaw(bytes, from, lineEnd);
    this.row.bytes = bytes;
    this.row.count = count;
    this.row.trouble = null;
    this.#line += 1;
    return lineEnd + 1;
  }

  #setRaw(bytes: Buffer, from: number, lineEnd: number): void {
    const { row } = this;
    row.line = this.#line;
    row.raw = bytes;
    row.rawStart = from;
    row.rawEnd = lineEnd > from && bytes[lineEnd - 1] === carriageReturn ? lineEnd - 1 : lineEnd;
  }

  #wait(bytes: Buffer, from: number): number {
    if (bytes.length - from > rowByteLimit) throw rowTooLong(this.#line);
    return -1;
  }

  /** A row that only csv-parse may split, or whose quotation marks are out of order. */
  #scanQuotedRow(bytes: Buffer, from: number, isLast: boolean): number {
    const extent = findRowExtent(bytes, from, bytes.length, this.#delimiter, isLast);
    if (extent.kind === 'malformed') return this.#breakRow(bytes, from, isLast, 'malformed-quotes');
    const isWithinLimit =
      (extent.kind === 'whole' ? extent.end : bytes.length) - from <= rowByteLimit;
    if (extent.kind === 'unclosed' && isWithinLimit && !isLast) return -1;
    if (extent.kind === 'unclosed' || !isWithinLimit) {
      return this.#breakRow(bytes, from, isLast, 'quote-not-closed');
    }
    const cells = this.#quoted.cells(withoutBlanks(bytes, from, extent));
    if (cells === null) return this.#breakRow(bytes, from, isLast, 'malformed-quotes');
    const lineEnd = bytes[extent.end - 1] === lineFeed ? extent.end - 1 : extent.end;
    this.#setRaw(bytes, from, lineEnd);
    this.#layCells(cells);
    this.#line += extent.lines;
    return extent.end;
  }

  #layCells(cells: readonly Buffer[]): void {
    const { row } = this;
    let at = 0;
    cells.slice(0, columnLimit + 1).forEach((cell, index) => {
      row.starts[index] = at;
      at += cell.length;
      row.ends[index] = at;
    });
    row.bytes = Buffer.concat(cells);
    row.count = cells.length;
    row.trouble = null;
  }

  #breakRow(
    bytes: Buffer,
    from: number,
    isLast: boolean,
    trouble: NonNullable<ScannedRow['trouble']>,
  ): number {
    const found = bytes.indexOf(lineFeed, from);
    if (found < 0 && !isLast) return this.#wait(bytes, from);
    const lineEnd = found < 0 ? bytes.length : found;
    if (lineEnd - from > rowByteLimit) throw rowTooLong(this.#line);
    this.#setRaw(bytes, from, lineEnd);
    this.row.bytes = bytes;
    this.row.count = 0;
    this.row.trouble = trouble;
    this.#line += 1;
    return lineEnd + 1;
  }
}

/** Steps over a carriage return that belongs to the row's line end. */
function behindReturn(bytes: Buffer, at: number, isLast: boolean): number {
  if (bytes[at] !== carriageReturn) return at;
  const next = at + 1 < bytes.length ? bytes[at + 1] === lineFeed : isLast;
  return next ? at + 1 : at;
}

/** Whether an unquoted cell is really a quoted one behind blanks. */
function quoteFollowsBlanks(bytes: Buffer, start: number, stop: number): boolean {
  let at = start;
  while (at < stop && (bytes[at] === space || bytes[at] === tab)) at += 1;
  return at > start && at < stop && bytes[at] === quote;
}

function rowTooLong(line: number): IntakeFailure {
  return new IntakeFailure(
    'row-too-long',
    `Line ${line} is longer than ${rowByteLimit.toLocaleString('en')} bytes.`,
    'Check that the file is delimited text with one row on each line.',
  );
}
