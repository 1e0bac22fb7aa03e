import type { ScannedRow } from './text/row-scanner.ts';

const space = 0x20;
const delete_ = 0x7f;

const strict = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true });

/**
 * One cell of the row in hand, without blanks at its ends: a slice of bytes, made text only where it has
 * to be.
 */
export class Cell {
  bytes: Buffer = Buffer.alloc(0);
  start = 0;
  end = 0;

  /** Moves to a cell of a row; an index below 0 stands for a column that the file does not have. */
  set(row: ScannedRow, index: number): this {
    this.bytes = row.bytes;
    if (index < 0) {
      this.start = this.end = 0;
      return this;
    }
    this.start = row.starts[index] as number;
    this.end = row.ends[index] as number;
    this.#trim();
    return this;
  }

  /** Moves to a text of its own. */
  setText(text: string): this {
    this.bytes = Buffer.from(text);
    this.start = 0;
    this.end = this.bytes.length;
    this.#trim();
    return this;
  }

  #trim(): void {
    const { bytes } = this;
    let { start, end } = this;
    while (start < end && blankBytesAt(bytes, start) > 0) start += blankBytesAt(bytes, start);
    while (end > start && blankBytesBefore(bytes, end) > 0) end -= blankBytesBefore(bytes, end);
    this.start = start;
    this.end = Math.max(start, end);
  }

  get isEmpty(): boolean {
    return this.start === this.end;
  }

  equals(other: Buffer): boolean {
    const { bytes, start, end } = this;
    if (end - start !== other.length || bytes[start] !== other[0]) return false;
    return bytes.compare(other, 0, other.length, start, end) === 0;
  }

  /** Whether it is plain ASCII without control characters, as most cells are. */
  get isPlain(): boolean {
    const { bytes, end } = this;
    for (let at = this.start; at < end; at++) {
      const byte = bytes[at] as number;
      if (byte < space || byte >= delete_) return false;
    }
    return true;
  }

  /** Whether the bytes are text that the database can hold: UTF-8 without zero bytes. */
  get isText(): boolean {
    return this.isPlain || this.text() !== null;
  }

  /** The text, or null where the bytes are none. */
  text(): string | null {
    if (this.isPlain) return this.bytes.toString('latin1', this.start, this.end);
    const slice = this.bytes.subarray(this.start, this.end);
    if (slice.includes(0)) return null;
    try {
      return strict.decode(slice);
    } catch {
      return null;
    }
  }

  /** The text with U+FFFD for what is none. */
  lossyText(): string {
    return lossyText(this.bytes, this.start, this.end);
  }

  /** Whether it has more characters (UTF-16 units) than this. */
  isLongerThan(characters: number): boolean {
    return this.end - this.start > characters && this.lossyText().length > characters;
  }

  /** SQL exports write NULL for nothing. */
  get isNullWord(): boolean {
    return this.end - this.start === 4 && /^null$/i.test(this.lossyText());
  }
}

/** Bytes as text that the database can hold, with U+FFFD for zero bytes and for what is no UTF-8. */
export function lossyText(bytes: Buffer, start: number, end: number): string {
  return bytes.toString('utf8', start, end).replaceAll('\0', '\uFFFD');
}

/** Length of the blank at a place: ASCII white space, or a no-break space in UTF-8. */
function blankBytesAt(bytes: Buffer, at: number): number {
  const byte = bytes[at] as number;
  if (isWhiteSpace(byte)) return 1;
  return byte === 0xc2 && bytes[at + 1] === 0xa0 ? 2 : 0;
}

function blankBytesBefore(bytes: Buffer, end: number): number {
  const byte = bytes[end - 1] as number;
  if (isWhiteSpace(byte)) return 1;
  return byte === 0xa0 && bytes[end - 2] === 0xc2 ? 2 : 0;
}

const isWhiteSpace = (byte: number): boolean => byte === space || (byte >= 0x09 && byte <= 0x0d);
