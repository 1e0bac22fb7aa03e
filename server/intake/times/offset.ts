import type { ByteCursor } from './byte-cursor.ts';

const colon = 0x3a;
const plus = 0x2b;
const minus = 0x2d;
const letter = { a: 0x61, c: 0x63, g: 0x67, m: 0x6d, p: 0x70, t: 0x74, u: 0x75, z: 0x7a } as const;

/**
 * Reads an offset from UTC: Z, UTC, GMT, or a sign with hours and perhaps minutes, with or without a colon.
 *
 * @returns seconds, or NaN where there is none at this place
 */
export function readOffset(cursor: ByteCursor): number {
  if (cursor.skipLetter(letter.z)) return 0;
  if (cursor.peek() === plus || cursor.peek() === minus) return readSignedOffset(cursor);
  const isNamed = cursor.skipLetter(letter.u)
    ? cursor.skipLetter(letter.t) && cursor.skipLetter(letter.c)
    : cursor.skipLetter(letter.g) && cursor.skipLetter(letter.m) && cursor.skipLetter(letter.t);
  return isNamed ? 0 : NaN;
}

function readSignedOffset(cursor: ByteCursor): number {
  const sign = cursor.skip(plus) ? 1 : -1;
  if (sign < 0) cursor.skip(minus);
  const hours = cursor.digits(2);
  if (cursor.taken !== 2 || hours > 18) return NaN;
  const hasColon = cursor.skip(colon);
  const minutes = cursor.digits(2);
  const isPartial = cursor.taken !== 2 && (hasColon || cursor.taken > 0);
  return isPartial || minutes > 59 ? NaN : sign * (hours * 3600 + minutes * 60);
}

/** Reads AM or PM, in either case; null where neither stands at this place. */
export function readHalfOfDay(cursor: ByteCursor): 'am' | 'pm' | null {
  const half = cursor.skipLetter(letter.p) ? 'pm' : cursor.skipLetter(letter.a) ? 'am' : null;
  return half && cursor.skipLetter(letter.m) ? half : null;
}

/** The hour from 0 to 23 of an hour from 1 to 12 before or after noon. */
export const hourOfHalf = (hour: number, half: 'am' | 'pm' | null): number =>
  (hour % 12) + (half === 'pm' ? 12 : 0);
