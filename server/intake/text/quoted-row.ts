import { parse, type Parser } from 'csv-parse';

const quote = 0x22;
const lineFeed = 0x0a;
const carriageReturn = 0x0d;

/** A row that ends before `end`, behind its line feed, with the blanks that stand around quoted cells. */
export interface WholeRow {
  kind: 'whole';
  end: number;
  lines: number;
  blanks: [from: number, to: number][];
}

/** Where a row ends, or why that cannot be told. */
export type RowExtent = WholeRow | { kind: 'malformed' } | { kind: 'unclosed' };

/**
 * Finds the end of a row whose cells may be quoted (RFC 4180): within quotes a doubled quotation mark is
 * one, and delimiters and line ends are text.
 *
 * @returns `unclosed` where the bytes end within a quoted cell or before the row's line end
 */
export function findRowExtent(
  bytes: Buffer,
  from: number,
  end: number,
  delimiter: number,
  isLast: boolean,
): RowExtent {
  const blanks: WholeRow['blanks'] = [];
  let lines = 1;
  let at = from;
  let cellStart = from;
  let cellBegins = true;
  while (at < end) {
    const byte = bytes[at];
    if (cellBegins && byte === quote) {
      const closing = findClosingQuote(bytes, at + 1, end);
      if (closing < 0) return { kind: 'unclosed' };
      for (let i = at; i < closing; i++) if (bytes[i] === lineFeed) lines += 1;
      if (cellStart < at) blanks.push([cellStart, at]);
      at = skipBlanks(bytes, closing + 1, end, delimiter);
      if (closing + 1 < at) blanks.push([closing + 1, at]);
      if (at >= end) break;
      if (!endsCell(bytes, at, end, delimiter)) return { kind: 'malformed' };
      cellBegins = false;
    } else if (byte === delimiter) {
      cellBegins = true;
      at += 1;
      cellStart = at;
    } else if (byte === lineFeed) {
      return { kind: 'whole', end: at + 1, lines, blanks };
    } else {
      if (!isBlank(byte)) cellBegins = false;
      at += 1;
    }
  }
  return isLast ? { kind: 'whole', end, lines, blanks } : { kind: 'unclosed' };
}

function findClosingQuote(bytes: Buffer, from: number, end: number): number {
  let at = bytes.indexOf(quote, from);
  while (at >= 0 && at < end) {
    if (at + 1 >= end || bytes[at + 1] !== quote) return at;
    at = bytes.indexOf(quote, at + 2);
  }
  return -1;
}

function skipBlanks(bytes: Buffer, from: number, end: number, delimiter: number): number {
  let at = from;
  while (at < end && bytes[at] !== delimiter && isBlank(bytes[at])) at += 1;
  return at;
}

const isBlank = (byte: number | undefined): boolean => byte === 0x20 || byte === 0x09;

function endsCell(bytes: Buffer, at: number, end: number, delimiter: number): boolean {
  const byte = bytes[at];
  if (byte === delimiter || byte === lineFeed) return true;
  return byte === carriageReturn && (at + 1 >= end || bytes[at + 1] === lineFeed);
}

/** The bytes of a row without the blanks around its quoted cells. */
export function withoutBlanks(bytes: Buffer, from: number, { end, blanks }: WholeRow): Buffer {
  const kept: Buffer[] = [];
  let at = from;
  for (const [blankFrom, blankTo] of blanks) {
    kept.push(bytes.subarray(at, blankFrom));
    at = blankTo;
  }
  kept.push(bytes.subarray(at, end));
  return Buffer.concat(kept);
}

/** A line end, and blank lines the parser skips: with them behind a row it need not wait for what follows. */
const padding = Buffer.from('\n'.repeat(16));
// csv-parse cannot trim cells that it hands out as bytes, so the blanks are taken away before.

/** Splits rows with doubled quotation marks or line ends within cells, one at a time, by csv-parse. */
export class QuotedRowParser {
  readonly #delimiter: string;
  #parser: Parser;

  constructor(delimiter: string) {
    this.#delimiter = delimiter;
    this.#parser = this.#makeParser();
  }

  /** The cells of one whole row, or null where csv-parse finds it malformed. */
  cells(row: Buffer): Buffer[] | null {
    this.#parser.write(Buffer.concat([row, padding]));
    const cells = this.#parser.read() as Buffer[] | null;
    if (cells === null) this.#parser = this.#makeParser();
    return cells;
  }

  #makeParser(): Parser {
    const parser = parse({
      delimiter: this.#delimiter,
      encoding: null,
      record_delimiter: ['\r\n', '\n'],
      relax_column_count: true,
      relax_quotes: true,
      skip_empty_lines: true,
    });
    // The row is refused by what `cells` answers; the parser is not used again.
    parser.on('error', () => undefined);
    return parser;
  }
}
