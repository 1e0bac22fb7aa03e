import { rowReasonSentence } from '../../../shared/row-reasons.ts';
import type { AreaRegister, NamedArea } from '../area-register.ts';
import { Cell } from '../cell.ts';
import { keyLengthLimit } from '../limits.ts';
import { quoteCell, type Refusal } from '../refusal.ts';
import { warningBit } from '../row-account.ts';
import type { ScannedRow } from '../text/row-scanner.ts';
import { refuseKey } from './row-frame.ts';

/** The cell of a row that names its area; what it found stays in its fields until the next row. */
export class AreaCell {
  area: NamedArea | null = null;
  warnings = 0;
  readonly #cell = new Cell();
  readonly #place: number;
  readonly #areas: AreaRegister;
  readonly #refuseUnknown: boolean;

  constructor(place: number, areas: AreaRegister, refuseUnknown: boolean) {
    this.#place = place;
    this.#areas = areas;
    this.#refuseUnknown = refuseUnknown;
  }

  read(row: ScannedRow): Refusal | null {
    this.warnings = 0;
    const place = this.#place;
    const cell = this.#cell.set(row, place);
    if (cell.isEmpty) return { reason: 'missing-area', detail: rowReasonSentence('missing-area') };
    const start = row.starts[place] as number;
    const written = this.#areas.find(cell, start, row.ends[place] as number);
    if (written === null || cell.end - cell.start > keyLengthLimit) {
      const refusal = refuseKey(cell, 'area');
      if (refusal || written === null) return refusal;
    }
    this.area = written.area;
    if (this.#refuseUnknown && written.area.areaId === null) return refuseUnknownArea(cell);
    if (written.isFolded) this.warnings = warningBit['area-spelling-folded'];
    return null;
  }
}

/** The refusal of an area that the site does not have. */
export const refuseUnknownArea = (cell: Cell): Refusal => ({
  reason: 'unknown-area',
  detail: `The area ${quoteCell(cell)} is not known.`,
});
