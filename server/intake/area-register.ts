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

/** A spelling as its bytes, so that no text has to be made of a cell that was seen before. */
interface KnownSpelling {
  bytes: Buffer;
  written: WrittenArea;
}

/** FNV-1a, 32 bits (Fowler, Noll & Vo). Spellings of one hash take turns; what is found is compared. */
function hashOf(bytes: Buffer, start: number, end: number): number {
  let hash = 0x811c9dc5;
  for (let at = start; at < end; at++) hash = Math.imul(hash ^ (bytes[at] as number), 0x01000193);
  return hash;
}

function isSame(kept: Buffer, bytes: Buffer, start: number, end: number): boolean {
  if (kept.length !== end - start) return false;
  for (let i = 0; i < kept.length; i++) if (kept[i] !== bytes[start + i]) return false;
  return true;
}

/** The areas that a file names, by any of their spellings. */
export class AreaRegister {
  /** The areas of accepted rows, by their number. */
  readonly accepted: NamedArea[] = [];
  readonly #known: ReadonlyMap<string, number>;
  readonly #byFolded = new Map<string, NamedArea>();
  readonly #byHash = new Map<number, KnownSpelling>();

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
    const hash = hashOf(cell.bytes, untrimmedStart, untrimmedEnd);
    const kept = this.#byHash.get(hash);
    if (kept && isSame(kept.bytes, cell.bytes, untrimmedStart, untrimmedEnd)) return kept.written;
    const name = cell.text();
    if (name === null) return null;
    const isPadded = untrimmedStart !== cell.start || untrimmedEnd !== cell.end;
    const area = this.#findFolded(name);
    const written = { area, isFolded: isPadded || name !== area.name };
    const bytes = Buffer.from(cell.bytes.subarray(untrimmedStart, untrimmedEnd));
    if (this.#byHash.size >= spellingsKept) this.#byHash.clear();
    this.#byHash.set(hash, { bytes, written });
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
    this.#byHash.clear();
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
