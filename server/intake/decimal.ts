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

/** Whole numbers in groups of three, by what divides the groups: 1.234 or 1 234 where the comma is decimal. */
const grouped = {
  '.': /^[+-]?\d{1,3}(?:[, \u00A0\u202F’']\d{3})+(?=\.|$)/u,
  ',': /^[+-]?\d{1,3}(?:[. \u00A0\u202F’']\d{3})+(?=,|$)/u,
};

/**
 * Reads a number of at most 15 digits on each side of its decimal sign, perhaps in groups of three; null
 * where it is none.
 */
export function readDecimal(text: string, decimalSign: '.' | ',' = '.'): Decimal | null {
  const groups = grouped[decimalSign].exec(text)?.[0] ?? '';
  const ungrouped = groups.replace(/[^\d+-]/gu, '') + text.slice(groups.length);
  const plain = decimalSign === ',' ? ungrouped.replace(',', '.') : ungrouped;
  if (decimalSign === ',' && ungrouped.includes('.')) return null;
  const found = written.exec(plain);
  if (!found || !/\d/.test(plain)) return null;
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
