import type { Ending, OptionalColumn } from '../../../shared/contracts/plan.ts';
import { rowReasonSentence, type SkipReason } from '../../../shared/row-reasons.ts';
import { Cell } from '../cell.ts';
import { keyLengthLimit } from '../limits.ts';
import type { Refusal } from '../refusal.ts';
import { quoteCell } from '../refusal.ts';
import type { ScannedRow } from '../text/row-scanner.ts';
import type { TimeReader } from '../times/time-reader.ts';
import { OptionalCells } from './optional-cells.ts';
import { SkippedRows } from './skipped-row.ts';
import { WordTable } from './word-table.ts';

export interface FrameRules {
  /** The header's cells, without blanks at their ends. */
  header: readonly string[];
  job: number;
  optional: Partial<Record<OptionalColumn, number>>;
  times: TimeReader;
  decimalSign: '.' | ',';
  statusWords: Partial<Record<Ending, readonly string[]>>;
}

/** What rows of every shape have in common: their form, the job, and what they say beside area and times. */
export class RowFrame {
  readonly job = new Cell();
  readonly optional: OptionalCells;
  skipReason: SkipReason = 'blank-line';
  /** How the stay ended by its status, where that is no good departure. */
  ending: Ending | null = null;
  readonly #header: readonly string[];
  readonly #jobPlace: number;
  readonly #skipped: SkippedRows;
  readonly #statusPlace: number;
  readonly #statusWords: WordTable<Ending>;
  readonly #status = new Cell();

  constructor({ header, job, optional, times, decimalSign, statusWords }: FrameRules) {
    this.#header = header;
    this.#jobPlace = job;
    this.#skipped = new SkippedRows(header);
    this.optional = new OptionalCells(optional, times, decimalSign);
    this.#statusWords = new WordTable(statusWords);
    this.#statusPlace = this.#statusWords.isEmpty ? -1 : (optional.status ?? -1);
  }

  /** Whether any word of the status ends a stay. */
  get tellsEndings(): boolean {
    return this.#statusPlace >= 0;
  }

  /** Whether the row says nothing; `skipReason` then tells why. */
  skips(row: ScannedRow): boolean {
    const reason = row.trouble === null ? this.#skipped.reasonFor(row) : null;
    if (reason !== null) this.skipReason = reason;
    return reason !== null;
  }

  /** The form of the row and its job. */
  readJob(row: ScannedRow): Refusal | null {
    if (row.trouble !== null) {
      return { reason: row.trouble, detail: rowReasonSentence(row.trouble) };
    }
    const expected = this.#header.length;
    if (row.count !== expected) {
      const detail = `The row has ${row.count} ${row.count === 1 ? 'cell' : 'cells'}; the header has ${expected}.`;
      return { reason: 'wrong-number-of-columns', detail };
    }
    const job = this.job.set(row, this.#jobPlace);
    if (job.isEmpty) return { reason: 'missing-job', detail: rowReasonSentence('missing-job') };
    return refuseKey(job, 'job');
  }

  /** What the row says beside its job, area and times. */
  readRest(row: ScannedRow): Refusal | null {
    if (this.#statusPlace >= 0) {
      this.ending = this.#statusWords.meaningOf(this.#status.set(row, this.#statusPlace));
    }
    return this.optional.read(row);
  }
}

/** Why a cell cannot name a job or an area, or null where it can. */
export function refuseKey(cell: Cell, word: string): Refusal | null {
  if (!cell.isText) {
    return { reason: 'unreadable-bytes', detail: `The ${word} ${quoteCell(cell)} is no text.` };
  }
  if (!cell.isLongerThan(keyLengthLimit)) return null;
  return {
    reason: 'cell-too-long',
    detail: `The ${word} has more than ${keyLengthLimit} characters.`,
  };
}
