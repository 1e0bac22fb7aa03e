import type { SkipReason } from '../../../shared/row-reasons.ts';
import { Cell } from '../cell.ts';
import type { ScannedRow } from '../text/row-scanner.ts';

/** Tells rows that say nothing from those that have to be read. */
export class SkippedRows {
  readonly #header: readonly Buffer[];
  readonly #cell = new Cell();

  /** @param header its cells, without blanks at their ends */
  constructor(header: readonly string[]) {
    this.#header = header.map((cell) => Buffer.from(cell));
  }

  /** Why the row is passed over, or null where it is to be read. */
  reasonFor(row: ScannedRow): SkipReason | null {
    const first = this.#cell.set(row, 0);
    if (!first.isEmpty) return this.#repeatsHeader(row) ? 'repeated-header' : null;
    if (row.count === 1) return 'blank-line';
    return this.#isEmptyThroughout(row) ? 'only-delimiters' : null;
  }

  #isEmptyThroughout(row: ScannedRow): boolean {
    for (let index = 1; index < row.count; index++) {
      if (!this.#cell.set(row, index).isEmpty) return false;
    }
    return true;
  }

  #repeatsHeader(row: ScannedRow): boolean {
    const header = this.#header;
    if (row.count !== header.length) return false;
    for (let index = 0; index < header.length; index++) {
      if (!this.#cell.set(row, index).equals(header[index] as Buffer)) return false;
    }
    return true;
  }
}
