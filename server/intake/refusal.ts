import type { RefusalReason } from '../../shared/row-reasons.ts';
import type { Cell } from './cell.ts';

/** Why a row is not taken: the reason that is counted, and the sentence that names what stands in the row. */
export interface Refusal {
  reason: RefusalReason;
  detail: string;
}

const shownLength = 80;

/** A cell's text as it is quoted in a sentence. */
export function quoteCell(cell: Cell): string {
  const text = cell.lossyText();
  return text.length > shownLength ? `“${text.slice(0, shownLength)}…”` : `“${text}”`;
}
