import type { DateSystem } from '../times/auto-time-reader.ts';

const secondsPerDay = 86_400;
const dayMs = 86_400_000;
/** The last day that a sheet knows is 9999-12-31. */
const serialLimit = { 1900: 2_958_466, 1904: 2_957_004 } as const;
const epoch = { 1900: Date.UTC(1899, 11, 30), 1904: Date.UTC(1904, 0, 1) } as const;
/** Two digits of each number below 60. */
const two = Array.from({ length: 60 }, (_, number) => String(number).padStart(2, '0'));

/**
 * Writes serial numbers of days as local ISO 8601 text, rounded to the nearest second. In the system of 1900
 * day 60 is a 29 February that never was (ECMA-376 part 1, section 18.17.4.1): it is written as that, days
 * before it count from 1899-12-31. A number below 1 is a time of day without a date.
 */
export class SerialText {
  readonly #system: DateSystem;
  #day = -1;
  #dayText = '';

  constructor(system: DateSystem) {
    this.#system = system;
  }

  /** The text, or null where the number is no moment that a sheet knows. */
  write(serial: number): string | null {
    if (!(serial >= 0 && serial < serialLimit[this.#system])) return null;
    let day = Math.floor(serial);
    let second = Math.round((serial - day) * secondsPerDay);
    if (second === secondsPerDay) {
      day += 1;
      second = 0;
    }
    const minutes = Math.floor(second / 60);
    const time = `${two[Math.floor(minutes / 60)]}:${two[minutes % 60]}:${two[second % 60]}`;
    return serial < 1 && day < 1 ? time : `${this.#textOf(day)}T${time}`;
  }

  /** Times come in order more often than not: the day is mostly the last one. */
  #textOf(day: number): string {
    if (day === this.#day) return this.#dayText;
    this.#day = day;
    this.#dayText = dayText(day, this.#system);
    return this.#dayText;
  }
}

function dayText(day: number, system: DateSystem): string {
  if (system === 1900 && day === 60) return '1900-02-29';
  const days = system === 1900 && day < 60 ? day + 1 : day;
  return new Date(epoch[system] + days * dayMs).toISOString().slice(0, 10);
}
