/**
 * Number formats of ECMA-376 part 1, section 18.8.30, that show dates or times and are known by their number
 * alone; 27 to 36 and 50 to 58 are those of East Asian editions. 46 shows elapsed time, which is no moment.
 */
const builtIn = new Set([
  ...[14, 15, 16, 17, 18, 19, 20, 21, 22, 45, 47],
  ...[27, 28, 29, 30, 31, 32, 33, 34, 35, 36, 50, 51, 52, 53, 54, 55, 56, 57, 58],
]);

/** Text in quotes, a character that is escaped, skipped or repeated, and conditions, colours and locales. */
const noField = /"[^"]*"|[\\_*].|\[[^\]]*\]|am\/pm|a\/p|general|standard/gi;
const elapsed = /\[(?:h+|m+|s+)\]/i;

/**
 * Whether a number format shows a moment, so that a number in it is one.
 *
 * @param code the format's code where the workbook gives one
 */
export function isDateFormat(id: number, code: string | undefined): boolean {
  if (code === undefined) return builtIn.has(id);
  const [positive = ''] = code.replace(/"[^"]*"/g, '').split(';');
  if (elapsed.test(positive)) return false;
  return /[dmyhs]/i.test(positive.replace(noField, ''));
}
