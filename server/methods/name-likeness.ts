/** The parts of a name that carry its meaning: words without accents, case, punctuation and plural, numbers without leading zeros. */
function wordsOf(name: string): string[] {
  const plain = name.normalize('NFKD').replace(/\p{M}/gu, '').toUpperCase().toLowerCase();
  return (plain.match(/\p{L}+|\p{N}+/gu) ?? []).map((word) =>
    /^\p{N}/u.test(word) ? word.replace(/^0+(?=.)/, '') : singular(word),
  );
}

const singular = (word: string): string =>
  word.length > 3 && word.endsWith('s') && !word.endsWith('ss') ? word.slice(0, -1) : word;

/**
 * Whether one text becomes the other by one letter left out, put in, changed, or changed places with its
 * neighbour: the four errors of F. J. Damerau, "A technique for computer detection and correction of
 * spelling errors", Communications of the ACM 7 (1964).
 */
export function isOneEditApart(one: string, other: string): boolean {
  if (one.length > other.length) return isOneEditApart(other, one);
  if (other.length - one.length > 1 || one === other) return false;
  let start = 0;
  while (start < one.length && one[start] === other[start]) start += 1;
  if (one.length < other.length) return one.slice(start) === other.slice(start + 1);
  if (one.slice(start + 1) === other.slice(start + 1)) return true;
  return (
    one[start] === other[start + 1] &&
    one[start + 1] === other[start] &&
    one.slice(start + 2) === other.slice(start + 2)
  );
}

/** Words that are shorter are letters and numbers that tell areas apart: Lathe A, Lathe B. */
const shortestWithSlip = 4;

/**
 * Whether two names differ by so little that they may be one: in case, accents, punctuation, blanks, a
 * plural, leading zeros, or by one slip of the pen in one longer word. Numbers and short words have to agree.
 */
export function areNamesAlike(one: string, other: string): boolean {
  const [words, others] = [wordsOf(one), wordsOf(other)];
  if (words.join('') === others.join('')) return words.length > 0 && one !== other;
  if (words.length !== others.length) return false;
  const differing = words.flatMap((word, index) => {
    const beside = others[index] ?? '';
    return word === beside ? [] : [[word, beside] as const];
  });
  const [only, ...more] = differing;
  if (!only || more.length > 0) return false;
  const [word, beside] = only;
  if (/\p{N}/u.test(word + beside)) return false;
  return Math.min(word.length, beside.length) >= shortestWithSlip && isOneEditApart(word, beside);
}
