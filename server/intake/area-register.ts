import { foldAreaSpelling } from '../../shared/area-spelling.ts';
import type { Cell } from './cell.ts';
import { IntakeFailure } from './failure.ts';
import { areaLimit } from './limits.ts';

/** An area that the file names. */
export interface NamedArea {
  /** Its number among the areas of accepted rows, or -1 as long as none was accepted. */
  number: number;
  /** As it is first written in the file, without blanks at its ends. */
  name: string;
  folded: string;
  /** The site's area with such a spelling, or null where there is none yet. */
  areaId: number | null;
  rows: number;
  /** Microseconds since 1970 UTC. */
  firstMicros: number;
  latestMicros: number;
}

/** An area as one cell writes it. */
export interface WrittenArea {
  area: NamedArea;
  /** Whether the cell writes it otherwise than where it is first written. */
  isFolded: boolean;
}

/** Spellings that are remembered byte by byte; there are hardly ever more, and more are read again. */
const spellingsKept = 10_000;

/** The areas that a file names, by any of their spellings. */
export class AreaRegister {
  /** The areas of accepted rows, by their number. */
  readonly accepted: NamedArea[] = [];
  readonly #known: ReadonlyMap<string, number>;
  readonly #byFolded = new Map<string, NamedArea>();
  readonly #byBytes = new Map<string, WrittenArea>();

  /** @param known the site's areas by folded spelling */
  constructor(known: ReadonlyMap<string, number>) {
    this.#known = known;
  }

  /**
   * The area that a cell names, or null where its bytes are no text.
   *
   * @param cell trimmed and not empty
   * @param untrimmedStart where the cell begins with its blanks, for telling spellings apart
   */
  find(cell: Cell, untrimmedStart: number, untrimmedEnd: number): WrittenArea | null {
    const key = cell.bytes.toString('latin1', untrimmedStart, untrimmedEnd);
    const kept = this.#byBytes.get(key);
    if (kept) return kept;
    const name = cell.text();
    if (name === null) return null;
    const isPadded = untrimmedStart !== cell.start || untrimmedEnd !== cell.end;
    const area = this.#findFolded(name);
    const written = { area, isFolded: isPadded || name !== area.name };
    if (this.#byBytes.size >= spellingsKept) this.#byBytes.clear();
    this.#byBytes.set(key, written);
    return written;
  }

  #findFolded(name: string): NamedArea {
    const folded = foldAreaSpelling(name);
    const found = this.#byFolded.get(folded);
    if (found) return found;
    const area: NamedArea = {
      number: -1,
      name,
      folded,
      areaId: this.#known.get(folded) ?? null,
      rows: 0,
      firstMicros: Infinity,
      latestMicros: -Infinity,
    };
    if (this.#byFolded.size >= spellingsKept) this.#forgetRefused();
    this.#byFolded.set(folded, area);
    return area;
  }

  /** Names that only refused rows bear could be without end. */
  #forgetRefused(): void {
    for (const [folded, area] of this.#byFolded) {
      if (area.number < 0) this.#byFolded.delete(folded);
    }
    this.#byBytes.clear();
  }

  /**
   * Counts an accepted row of an area.
   *
   * @throws IntakeFailure where the file names more areas than are allowed
   */
  accept(area: NamedArea, firstMicros: number, latestMicros: number): void {
    if (area.number < 0) {
      if (this.accepted.length >= areaLimit) throw tooManyAreas();
      area.number = this.accepted.push(area) - 1;
    }
    area.rows += 1;
    if (firstMicros < area.firstMicros) area.firstMicros = firstMicros;
    if (latestMicros > area.latestMicros) area.latestMicros = latestMicros;
  }
}

function tooManyAreas(): IntakeFailure {
  return new IntakeFailure(
    'too-many-areas',
    `The file names more than ${areaLimit} areas.`,
    'Check that the column plan takes the area from the right column.',
  );
}
