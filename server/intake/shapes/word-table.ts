import type { Cell } from '../cell.ts';

/** Words as they are compared: composed, without blanks at their ends, without case. */
export const foldWord = (word: string): string => word.normalize('NFC').trim().toLowerCase();

/** Spellings that are remembered as they came; there are hardly ever more. */
const spellingsKept = 1000;

/** What the words of one column mean. */
export class WordTable<Meaning extends string> {
  readonly #meanings = new Map<string, Meaning>();
  readonly #seen = new Map<string, Meaning | null>();

  constructor(words: Partial<Record<Meaning, readonly string[]>>) {
    for (const [meaning, list] of Object.entries(words) as [Meaning, readonly string[]][]) {
      for (const word of list) this.#meanings.set(foldWord(word), meaning);
    }
  }

  get isEmpty(): boolean {
    return this.#meanings.size === 0;
  }

  /** What the word in a cell means, or null where it is none of them. */
  meaningOf(cell: Cell): Meaning | null {
    if (cell.isEmpty) return null;
    const written = cell.lossyText();
    const seen = this.#seen.get(written);
    if (seen !== undefined) return seen;
    const meaning = this.#meanings.get(foldWord(written)) ?? null;
    if (this.#seen.size >= spellingsKept) this.#seen.clear();
    this.#seen.set(written, meaning);
    return meaning;
  }
}
