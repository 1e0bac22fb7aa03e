import type { Cell } from './cell.ts';

/** A decimal number as its digits, so that it is kept exactly as it was written. */
export interface Decimal {
  isNegative: boolean;
  /** Digits before the point, without leading zeros; empty below one. */
  whole: string;
  /** Digits behind the point, as written. */
  fraction: string;
}

const written = /^([+-]?)0*(\d{0,15})(?:\.(\d{0,15}))?$/;

/** Reads a number with a decimal point, of at most 15 digits on each side; null where it is none. */
export function readDecimal(text: string): Decimal | null {
  const found = written.exec(text);
  if (!found || !/\d/.test(text)) return null;
  const [, sign, whole = '', fraction = ''] = found;
  return { isNegative: sign === '-', whole, fraction };
}

/** Whether the number is above zero. */
export function isPositive({ isNegative, whole, fraction }: Decimal): boolean {
  return !isNegative && (whole !== '' || /[1-9]/.test(fraction));
}

/** A whole number of at most four digits, as most quantities are; -1 where the cell holds something else. */
export function readSmallWhole({ bytes, start, end }: Cell): number {
  if (end - start > 4) return -1;
  let value = 0;
  for (let at = start; at < end; at++) {
    const digit = (bytes[at] as number) - 0x30;
    if (digit < 0 || digit > 9) return -1;
    value = value * 10 + digit;
  }
  return value;
}
