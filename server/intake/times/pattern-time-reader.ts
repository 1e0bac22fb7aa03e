import { tz } from '@date-fns/tz';
import { parse } from 'date-fns';
import { ByteCursor } from './byte-cursor.ts';
import { dayExists, daysSince1970, fullYear } from './calendar.ts';
import type { LocalClock } from './local-clock.ts';
import { hourOfHalf, readHalfOfDay, readOffset } from './offset.ts';
import type { PatternStep, TimePattern } from './time-pattern.ts';
import type { TimeForm, TimeReader, TimeTrouble } from './time-reader.ts';

/** Reads times written in one given pattern: by its compiled steps, or through date-fns where it has none. */
export class PatternTimeReader implements TimeReader {
  micros = NaN;
  second = NaN;
  skipped = false;
  readonly form: TimeForm = 'pattern';
  readonly #pattern: TimePattern;
  readonly #clock: LocalClock;
  readonly #cursor = new ByteCursor();
  readonly #at = {
    year: 0,
    month: 0,
    day: 0,
    hour: 0,
    minute: 0,
    second: 0,
    micros: 0,
    half: null as 'am' | 'pm' | null,
    halfHour: NaN,
    offset: NaN,
  };

  constructor(pattern: TimePattern, clock: LocalClock) {
    this.#pattern = pattern;
    this.#clock = clock;
  }

  read(bytes: Buffer, start: number, end: number): TimeTrouble | null {
    this.second = NaN;
    this.skipped = false;
    const { steps } = this.#pattern;
    const isRead = steps
      ? this.#readSteps(steps, this.#cursor.reset(bytes, start, end))
      : this.#readByDateFns(bytes.toString('utf8', start, end));
    return isRead ? null : 'unreadable';
  }

  #readSteps(steps: readonly PatternStep[], cursor: ByteCursor): boolean {
    const at = this.#at;
    at.hour = at.minute = at.second = at.micros = 0;
    at.halfHour = NaN;
    at.offset = NaN;
    for (const step of steps) if (!this.#readStep(step, cursor)) return false;
    if (!cursor.ended) return false;
    if (!Number.isNaN(at.halfHour)) at.hour = hourOfHalf(at.halfHour, at.half);
    if (!dayExists(at.year, at.month, at.day)) return false;
    if (at.hour > 23 || at.minute > 59 || at.second > 59) return false;
    const days = daysSince1970(at.year, at.month, at.day);
    const seconds = ((days * 24 + at.hour) * 60 + at.minute) * 60 + at.second;
    if (Number.isNaN(at.offset)) this.#setLocal(seconds * 1000, at.micros);
    else this.micros = (seconds - at.offset) * 1_000_000 + at.micros;
    return true;
  }

  #readStep(step: PatternStep, cursor: ByteCursor): boolean {
    const at = this.#at;
    switch (step.field) {
      case 'literal':
        return step.bytes.every((byte) => cursor.skip(byte));
      case 'offset':
        at.offset = readOffset(cursor);
        return !Number.isNaN(at.offset);
      case 'half-of-day':
        at.half = readHalfOfDay(cursor);
        return at.half !== null;
      case 'fraction':
        at.micros = cursor.millionths();
        return cursor.taken > 0;
      case 'short-year':
        at.year = fullYear(cursor.digits(2));
        return cursor.taken === 2;
      case 'half-hour':
        at.halfHour = cursor.digits(2);
        return at.halfHour >= 1 && at.halfHour <= 12;
      default:
        at[step.field] = cursor.digits(step.most);
        return cursor.taken >= step.least;
    }
  }

  /** Month names, days of the year and the like. date-fns reads to the millisecond. */
  #readByDateFns(text: string): boolean {
    const read = parse(text, this.#pattern.pattern, new Date(0), { in: tz('UTC') }).getTime();
    if (Number.isNaN(read)) return false;
    if (this.#pattern.hasOffset) this.micros = read * 1000;
    else this.#setLocal(read, 0);
    return true;
  }

  #setLocal(clock: number, micros: number): void {
    this.micros = this.#clock.read(clock) * 1000 + micros;
    this.second = this.#clock.second * 1000 + micros;
    this.skipped = this.#clock.skipped;
  }
}
