import type { ByteCursor } from './byte-cursor.ts';
import { hourOfHalf, readHalfOfDay, readOffset } from './offset.ts';

const dot = 0x2e;
const comma = 0x2c;
const colon = 0x3a;

/** Reads the time of day and the offset behind a date; what it found stays in its fields. */
export class TimeOfDay {
  /** Seconds since midnight. */
  seconds = 0;
  /** Millionths of a second beyond them. */
  micros = 0;
  /** Offset from UTC in seconds, or NaN where none is given. */
  offset = NaN;
  #hasSeconds = false;

  /** @returns whether the rest of the cell is a time of day, perhaps with an offset, and nothing else */
  read(cursor: ByteCursor): boolean {
    if (!this.#readHours(cursor)) return false;
    // A fraction of a minute is no fraction of a second.
    if (!this.#hasSeconds && isPoint(cursor.peek())) return false;
    return this.readAfterSeconds(cursor, this.seconds);
  }

  /** The same where the seconds were read already: a fraction, AM or PM, an offset may follow them. */
  readAfterSeconds(cursor: ByteCursor, seconds: number): boolean {
    this.seconds = seconds;
    this.micros = 0;
    this.offset = NaN;
    if (isPoint(cursor.peek())) {
      cursor.at += 1;
      this.micros = cursor.millionths();
      if (cursor.taken === 0) return false;
    }
    if (cursor.ended) return true;
    cursor.skipBlanks();
    if (!this.#readHalf(cursor)) return false;
    cursor.skipBlanks();
    if (cursor.ended) return true;
    this.offset = readOffset(cursor);
    return !Number.isNaN(this.offset) && cursor.ended;
  }

  #readHours(cursor: ByteCursor): boolean {
    const hour = cursor.digits(2);
    if (cursor.taken === 0) return false;
    const hasColons = cursor.skip(colon);
    const minute = cursor.digits(2);
    if (cursor.taken !== 2) return false;
    const mayFollow = !hasColons || cursor.skip(colon);
    const second = mayFollow ? cursor.digits(2) : 0;
    this.#hasSeconds = mayFollow && cursor.taken === 2;
    if (mayFollow && !this.#hasSeconds && (hasColons || cursor.taken > 0)) return false;
    this.seconds = hour * 3600 + minute * 60 + second;
    return minute < 60 && second < 60 && (hour < 24 || this.seconds === 86_400);
  }

  /** AM or PM, where it stands behind an hour from 1 to 12. */
  #readHalf(cursor: ByteCursor): boolean {
    const half = readHalfOfDay(cursor);
    if (half === null) return true;
    const hour = Math.floor(this.seconds / 3600);
    this.seconds += (hourOfHalf(hour, half) - hour) * 3600;
    return hour >= 1 && hour <= 12;
  }
}

const isPoint = (byte: number): boolean => byte === dot || byte === comma;
