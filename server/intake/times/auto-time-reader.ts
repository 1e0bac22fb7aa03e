import type { DateOrder } from '../../../shared/contracts/plan.ts';
import { ByteCursor } from './byte-cursor.ts';
import { dayExists, daysSince1970, fullYear } from './calendar.ts';
import type { LocalClock } from './local-clock.ts';
import { TimeOfDay } from './time-of-day.ts';
import type { TimeForm, TimeReader, TimeTrouble } from './time-reader.ts';

const dash = 0x2d;
const slash = 0x2f;
const dot = 0x2e;
const comma = 0x2c;
const letterT = 0x74;

const secondsPerDay = 86_400;
/** Spreadsheet serials count days from 1899-12-30; from 1900-03-01 on that agrees with the calendar. */
/** Serial number of 1970-01-01 in each of the two systems in which spreadsheets count days. */
const serialOf1970 = { 1900: 25_569, 1904: 24_107 } as const;
export type DateSystem = keyof typeof serialOf1970;

/**
 * Reads times in whatever form they come, told apart by their form alone: ISO 8601 with an offset or
 * local, year-first with other separators, day and month in the file's order, the compact forms of eight
 * and fourteen digits, spreadsheet serials (five digits before the point, rounded to the second), epoch
 * seconds (nine or ten digits) and epoch milliseconds (twelve or thirteen).
 *
 * Fractions of a second are kept to the microsecond; further digits are dropped.
 */
export class AutoTimeReader implements TimeReader {
  micros = NaN;
  second = NaN;
  skipped = false;
  form: TimeForm = 'iso-local';
  readonly #clock: LocalClock;
  readonly #dateOrder: DateOrder | null;
  readonly #cursor = new ByteCursor();
  readonly #time = new TimeOfDay();
  #days = 0;

  readonly #serialOf1970: number;

  /**
   * @param dateOrder null where nothing is known: a dotted date is then day first, others unreadable
   * @param dateSystem by which serials count days
   */
  constructor(clock: LocalClock, dateOrder: DateOrder | null, dateSystem: DateSystem = 1900) {
    this.#clock = clock;
    this.#dateOrder = dateOrder;
    this.#serialOf1970 = serialOf1970[dateSystem];
  }

  read(bytes: Buffer, start: number, end: number): TimeTrouble | null {
    const cursor = this.#cursor.reset(bytes, start, end);
    this.second = NaN;
    this.skipped = false;
    const sign = cursor.skip(dash) ? -1 : 1;
    const first = cursor.digits(14);
    const length = cursor.taken;
    if (length > 4 || sign < 0) return this.#readNumber(sign, first, length) ? null : 'unreadable';
    return this.#readDate(first, length) ?? this.#readRest();
  }

  /** Three numbers with the same separator between them; leaves the day in `#days`. */
  #readDate(first: number, firstLength: number): TimeTrouble | null {
    const cursor = this.#cursor;
    const separator = cursor.peek();
    if (separator !== dash && separator !== slash && separator !== dot) return 'unreadable';
    cursor.at += 1;
    const second = cursor.digits(2);
    if (cursor.taken === 0 || !cursor.skip(separator)) return 'unreadable';
    const third = cursor.digits(4);
    const thirdLength = cursor.taken;
    if (firstLength === 4) {
      this.form = 'iso-local';
      return thirdLength <= 2 && this.#setDay(first, second, third) ? null : 'unreadable';
    }
    this.form = 'day-and-month';
    if (firstLength > 2 || (thirdLength !== 2 && thirdLength !== 4)) return 'unreadable';
    const order = this.#dateOrder ?? (separator === dot ? 'day-first' : null);
    return this.#readInOrder(order, thirdLength === 2 ? fullYear(third) : third, first, second);
  }

  #readInOrder(
    order: DateOrder | null,
    year: number,
    first: number,
    second: number,
  ): TimeTrouble | null {
    if (order === 'day-first' && this.#setDay(year, second, first)) return null;
    if (order === 'month-first' && this.#setDay(year, first, second)) return null;
    const isDate = dayExists(year, second, first) || dayExists(year, first, second);
    return isDate ? 'other-date-order' : 'unreadable';
  }

  #setDay(year: number, month: number, day: number): boolean {
    if (!dayExists(year, month, day)) return false;
    this.#days = daysSince1970(year, month, day);
    return true;
  }

  /** What follows a date: nothing, which means midnight, or a time of day. */
  #readRest(): TimeTrouble | null {
    const cursor = this.#cursor;
    const time = this.#time;
    if (cursor.ended) this.#setLocal(this.#days * secondsPerDay, 0);
    else if (!cursor.skipLetter(letterT) && !cursor.skipBlanks()) return 'unreadable';
    else if (!time.read(cursor)) return 'unreadable';
    else this.#setTime(time.seconds);
    return null;
  }

  #setTime(secondsOfDay: number): void {
    const { offset, micros } = this.#time;
    const local = this.#days * secondsPerDay + secondsOfDay;
    if (Number.isNaN(offset)) return this.#setLocal(local, micros);
    this.form = 'iso-with-offset';
    this.micros = (local - offset) * 1_000_000 + micros;
  }

  #setLocal(localSeconds: number, micros: number): void {
    const clock = this.#clock;
    this.micros = clock.read(localSeconds * 1000) * 1000 + micros;
    this.second = clock.second * 1000 + micros;
    this.skipped = clock.skipped;
  }

  #readNumber(sign: number, whole: number, length: number): boolean {
    const isEpoch = length === 9 || length === 10 || length === 12 || length === 13;
    if (isEpoch) return this.#readEpoch(sign, whole, length);
    if (sign < 0) return false;
    if (length === 5) return this.#readSerial(whole);
    if (length === 8) return this.#readCompactDay(whole) && this.#readRest() === null;
    return length === 14 && this.#readCompact(whole);
  }

  #readEpoch(sign: number, whole: number, length: number): boolean {
    const cursor = this.#cursor;
    const hasPoint = cursor.skip(dot) || cursor.skip(comma);
    const fraction = hasPoint ? cursor.millionths() : 0;
    if (!cursor.ended || (hasPoint && cursor.taken === 0)) return false;
    const isSeconds = length <= 10;
    this.form = isSeconds ? 'epoch-seconds' : 'epoch-milliseconds';
    this.micros = isSeconds
      ? sign * (whole * 1_000_000 + fraction)
      : sign * (whole * 1000 + Math.trunc(fraction / 1000));
    return true;
  }

  #readSerial(whole: number): boolean {
    const cursor = this.#cursor;
    const hasPoint = cursor.skip(dot) || cursor.skip(comma);
    const digits = hasPoint ? cursor.digits(15) : 0;
    const fraction = hasPoint ? digits / 10 ** cursor.taken : 0;
    if (hasPoint && cursor.taken === 0) return false;
    cursor.digits(Infinity);
    if (!cursor.ended) return false;
    this.form = 'serial';
    const seconds = Math.round(fraction * secondsPerDay);
    this.#setLocal((whole - this.#serialOf1970) * secondsPerDay + seconds, 0);
    return true;
  }

  #readCompactDay(digits: number): boolean {
    this.form = 'compact';
    const year = Math.floor(digits / 10_000);
    return this.#setDay(year, Math.floor(digits / 100) % 100, digits % 100);
  }

  /** Fourteen digits: year, month, day, hour, minute, second. */
  #readCompact(digits: number): boolean {
    if (!this.#readCompactDay(Math.floor(digits / 1_000_000))) return false;
    const hour = Math.floor(digits / 10_000) % 100;
    const minute = Math.floor(digits / 100) % 100;
    const second = digits % 100;
    if (hour > 23 || minute > 59 || second > 59) return false;
    if (!this.#time.readAfterSeconds(this.#cursor, hour * 3600 + minute * 60 + second))
      return false;
    this.#setTime(this.#time.seconds);
    return true;
  }
}
