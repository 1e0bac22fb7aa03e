const daysOfMonth = [31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];

/** Whether a day of the proleptic Gregorian calendar exists; month from 1. */
export function dayExists(year: number, month: number, day: number): boolean {
  if (month < 1 || month > 12 || day < 1 || year < 1 || year > 9999) return false;
  const isLeap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
  return day <= (month === 2 && isLeap ? 29 : (daysOfMonth[month - 1] ?? 0));
}

/**
 * Days from 1970-01-01 to a day of the proleptic Gregorian calendar, negative before it. Years are
 * reckoned from March, so that the leap day is the last of its year, in cycles of 400 years.
 */
export function daysSince1970(year: number, month: number, day: number): number {
  const shifted = month <= 2 ? year - 1 : year;
  const cycle = Math.floor(shifted / 400);
  const yearOfCycle = shifted - cycle * 400;
  const dayOfYear = Math.floor((153 * (month > 2 ? month - 3 : month + 9) + 2) / 5) + day - 1;
  const dayOfCycle =
    yearOfCycle * 365 + Math.floor(yearOfCycle / 4) - Math.floor(yearOfCycle / 100) + dayOfYear;
  return cycle * 146_097 + dayOfCycle - 719_468;
}

/** Two digits of a year: 70 to 99 are of the twentieth century, 00 to 69 of this one (common practice). */
export const fullYear = (twoDigits: number): number => twoDigits + (twoDigits < 70 ? 2000 : 1900);
