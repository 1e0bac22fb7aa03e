import type { TimeForm, TimeReader, TimeTrouble } from './time-reader.ts';

/** Length of 2026-03-01T08:15:00. */
const isoLength = 19;
const letterT = 0x54;

/**
 * Reads the times of a workbook where its plan gives a pattern: cells that are text by the pattern, and
 * cells that are dates, which reach it as local ISO text, as they are.
 */
export class CellTimeReader implements TimeReader {
  micros = NaN;
  second = NaN;
  skipped = false;
  form: TimeForm = 'pattern';
  readonly #byPattern: TimeReader;
  readonly #iso: TimeReader;

  constructor(byPattern: TimeReader, iso: TimeReader) {
    this.#byPattern = byPattern;
    this.#iso = iso;
  }

  read(bytes: Buffer, start: number, end: number): TimeTrouble | null {
    if (this.#take(this.#byPattern, bytes, start, end)) return null;
    const isIso = end - start === isoLength && bytes[start + 10] === letterT;
    return isIso && this.#take(this.#iso, bytes, start, end) ? null : 'unreadable';
  }

  #take(reader: TimeReader, bytes: Buffer, start: number, end: number): boolean {
    if (reader.read(bytes, start, end) !== null) return false;
    this.micros = reader.micros;
    this.second = reader.second;
    this.skipped = reader.skipped;
    this.form = reader.form;
    return true;
  }
}
