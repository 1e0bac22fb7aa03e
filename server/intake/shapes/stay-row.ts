import { rowReasonSentence, type SkipReason } from '../../../shared/row-reasons.ts';
import type { AreaRegister, NamedArea } from '../area-register.ts';
import type { BinaryCopy } from '../binary-copy.ts';
import { Cell } from '../cell.ts';
import { keyLengthLimit } from '../limits.ts';
import { quoteCell, type Refusal } from '../refusal.ts';
import { warningBit } from '../row-account.ts';
import type { ScannedRow } from '../row-scanner.ts';
import type { TimeReader } from '../times/time-reader.ts';
import { OptionalCells } from './optional-cells.ts';
import { SkippedRows } from './skipped-row.ts';
import type { StayColumnPlaces } from './stay-columns.ts';
import { StayTimes, type TimeBounds } from './stay-times.ts';

/** By what a row per stay is read. */
export interface StayRowRules {
  /** The header's cells, without blanks at their ends. */
  header: readonly string[];
  places: StayColumnPlaces;
  times: TimeReader;
  bounds: TimeBounds;
  areas: AreaRegister;
  refuseUnknownAreas: boolean;
}

export type RowOutcome = 'accepted' | 'skipped' | 'refused';

/**
 * Reads rows that tell one stay each and holds them to the rules; what it found stays in its fields until
 * the next row.
 */
export class StayRow {
  readonly job = new Cell();
  area: NamedArea | null = null;
  readonly times: StayTimes;
  readonly optional: OptionalCells;
  /** Bits of the warnings with which the row was accepted. */
  warnings = 0;
  skipReason: SkipReason = 'blank-line';
  refusal: Refusal | null = null;
  readonly #rules: StayRowRules;
  readonly #skipped: SkippedRows;
  readonly #areaCell = new Cell();

  constructor(rules: StayRowRules) {
    this.#rules = rules;
    this.#skipped = new SkippedRows(rules.header);
    this.times = new StayTimes(rules.places, rules.times, rules.bounds);
    this.optional = new OptionalCells(rules.places, rules.times);
  }

  /** @throws IntakeFailure where the row names one area too many for a file */
  read(row: ScannedRow): RowOutcome {
    const skipReason = row.trouble === null ? this.#skipped.reasonFor(row) : null;
    if (skipReason !== null) {
      this.skipReason = skipReason;
      return 'skipped';
    }
    this.warnings = 0;
    this.refusal =
      this.#checkForm(row) ??
      this.#readJob(row) ??
      this.#readArea(row) ??
      this.times.read(row) ??
      this.optional.read(row);
    if (this.refusal !== null) return 'refused';
    this.warnings |= this.times.warnings | this.optional.warnings;
    if (this.area) this.#rules.areas.accept(this.area, this.times.first, this.times.latest);
    return 'accepted';
  }

  #checkForm(row: ScannedRow): Refusal | null {
    if (row.trouble !== null) {
      return { reason: row.trouble, detail: rowReasonSentence(row.trouble) };
    }
    const expected = this.#rules.header.length;
    if (row.count === expected) return null;
    const detail = `The row has ${row.count} ${row.count === 1 ? 'cell' : 'cells'}; the header has ${expected}.`;
    return { reason: 'wrong-number-of-columns', detail };
  }

  #readJob(row: ScannedRow): Refusal | null {
    const job = this.job.set(row, this.#rules.places.job);
    if (job.isEmpty) return { reason: 'missing-job', detail: rowReasonSentence('missing-job') };
    return refuseKey(job, 'job');
  }

  #readArea(row: ScannedRow): Refusal | null {
    const { areas, places, refuseUnknownAreas } = this.#rules;
    const cell = this.#areaCell.set(row, places.area);
    if (cell.isEmpty) return { reason: 'missing-area', detail: rowReasonSentence('missing-area') };
    const start = row.starts[places.area] as number;
    const written = areas.find(cell, start, row.ends[places.area] as number);
    if (written === null || cell.end - cell.start > keyLengthLimit) {
      const refusal = refuseKey(cell, 'area');
      if (refusal || written === null) return refusal;
    }
    this.area = written.area;
    if (refuseUnknownAreas && written.area.areaId === null) {
      return { reason: 'unknown-area', detail: `The area ${quoteCell(cell)} is not known.` };
    }
    if (written.isFolded) this.warnings |= warningBit['area-spelling-folded'];
    return null;
  }

  /** The columns of the staging table that `write` fills. */
  get stagedColumns(): string[] {
    const optional = this.optional.columns.map((column) => stagedColumn[column] ?? column);
    return ['line', 'job_key', 'area_number', 'arrived', 'started', 'finished', ...optional];
  }

  /** Writes the accepted row, a field for each of `stagedColumns`. */
  write(copy: BinaryCopy, line: number, fields: number): void {
    copy.beginRow(fields);
    copy.int4(line);
    copy.bytes(this.job.bytes, this.job.start, this.job.end);
    copy.int4(this.area?.number ?? -1);
    for (let index = 0; index < 3; index++) copy.timestamp(this.times.of(index));
    this.optional.write(copy);
  }
}

/** Names of staging columns that differ from those of the plan. */
const stagedColumn: Readonly<Record<string, string>> = {
  record: 'record_key',
  workContent: 'work_content',
};

function refuseKey(cell: Cell, word: string): Refusal | null {
  if (!cell.isText) {
    return { reason: 'unreadable-bytes', detail: `The ${word} ${quoteCell(cell)} is no text.` };
  }
  if (!cell.isLongerThan(keyLengthLimit)) return null;
  return {
    reason: 'cell-too-long',
    detail: `The ${word} has more than ${keyLengthLimit} characters.`,
  };
}
