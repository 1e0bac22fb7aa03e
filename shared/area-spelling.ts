/**
 * The form under which spellings of one area's name are the same: Unicode NFC, trimmed, inner blanks made
 * one, case folded (through upper case, so that ß and ss agree).
 */
export function foldAreaSpelling(written: string): string {
  return written
    .normalize('NFC')
    .trim()
    .replace(/\s+/gu, ' ')
    .toUpperCase()
    .toLowerCase()
    .normalize('NFC');
}
