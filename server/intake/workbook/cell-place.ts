/** Columns beyond three letters do not occur; the last one is XFD. */
const lettersAtMost = 3;

/** The column of a reference such as AB12, from 0; -1 where it is none. */
export function columnOf(reference: string): number {
  let column = 0;
  let at = 0;
  for (; at < reference.length; at++) {
    const letter = (reference.charCodeAt(at) & 0xdf) - 0x40;
    if (letter < 1 || letter > 26) break;
    column = column * 26 + letter;
  }
  return at > lettersAtMost ? -1 : column - 1;
}
