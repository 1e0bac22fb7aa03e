import { IntakeFailure } from './failure.ts';
import { columnLimit, rowByteLimit } from './limits.ts';
import type { ScannedRow } from './text/row-scanner.ts';

/**
 * A row that is put together cell by cell, for kinds of files that are no delimited text. It is the same
 * object for each row; `begin` empties it.
 */
export class BuiltRow implements ScannedRow {
  bytes: Buffer = Buffer.allocUnsafe(4096);
  readonly starts = new Int32Array(columnLimit + 1);
  readonly ends = new Int32Array(columnLimit + 1);
  count = 0;
  line = 0;
  readonly rawStart = 0;
  readonly trouble = null;
  readonly #describe: (row: BuiltRow) => string;
  #length = 0;
  #raw: Buffer | null = null;

  /** @param describe the row as one line of text; only asked where it is shown */
  constructor(describe: (row: BuiltRow) => string) {
    this.#describe = describe;
  }

  begin(line: number): void {
    this.line = line;
    this.starts.fill(0, 0, this.count);
    this.ends.fill(0, 0, this.count);
    this.count = this.#length = 0;
    this.#raw = null;
  }

  /** Sets a cell in any order; those between are empty. */
  set(place: number, text: string): void {
    const start = this.#reserve(text.length * 3);
    this.#close(place, start, this.#write(text, start));
  }

  setBytes(place: number, from: Buffer, start: number, end: number): void {
    const at = this.#reserve(end - start);
    from.copy(this.bytes, at, start, end);
    this.#close(place, at, at + end - start);
  }

  /** Makes the row so wide, with empty cells at its end or without those that stand there. */
  resize(count: number): void {
    for (let place = this.count; place < Math.min(count, columnLimit + 1); place++) {
      this.starts[place] = this.ends[place] = 0;
    }
    this.count = count;
  }

  get raw(): Buffer {
    return (this.#raw ??= Buffer.from(this.#describe(this)));
  }

  get rawEnd(): number {
    return this.raw.length;
  }

  /** Most cells are short ASCII, for which a call of the runtime costs more than the loop. */
  #write(text: string, start: number): number {
    const { bytes } = this;
    const { length } = text;
    if (length > 64) return start + bytes.write(text, start);
    for (let index = 0; index < length; index++) {
      const code = text.charCodeAt(index);
      if (code > 0x7f) return start + bytes.write(text, start);
      bytes[start + index] = code;
    }
    return start + length;
  }

  #close(place: number, start: number, end: number): void {
    if (place >= this.count) this.resize(place + 1);
    this.#length = end;
    if (end > rowByteLimit) throw rowTooLong(this.line);
    if (place > columnLimit) return;
    this.starts[place] = start;
    this.ends[place] = end;
  }

  /** @returns where the next cell begins */
  #reserve(length: number): number {
    const needed = this.#length + length;
    if (needed > this.bytes.length) {
      const larger = Buffer.allocUnsafe(Math.max(needed, this.bytes.length * 2));
      this.bytes.copy(larger, 0, 0, this.#length);
      this.bytes = larger;
    }
    return this.#length;
  }
}

function rowTooLong(line: number): IntakeFailure {
  return new IntakeFailure(
    'row-too-long',
    `Row ${line} holds more than ${rowByteLimit.toLocaleString('en')} bytes.`,
    'Leave long texts out of the export.',
  );
}
