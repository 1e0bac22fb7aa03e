import { zoneRules } from '../../../shared/local-time.ts';
import { AutoTimeReader } from '../times/auto-time-reader.ts';
import { LocalClock } from '../times/local-clock.ts';

const reader = new AutoTimeReader(new LocalClock(zoneRules('UTC')), null);
const digits = /^-?\d+(?:[.,]\d+)?$/;

/** Whether a cell is a time in any of the forms that are read, in whichever order of day and month. */
export function isTime(text: string): boolean {
  const bytes = Buffer.from(text);
  return reader.read(bytes, 0, bytes.length) !== 'unreadable';
}

/** Whether a cell is digits alone, which may be a time or any number. */
export const isDigits = (text: string): boolean => digits.test(text);

/** Whether a cell is written as a date or a time, which nothing else is. */
export const isWrittenTime = (text: string): boolean => !isDigits(text) && isTime(text);
