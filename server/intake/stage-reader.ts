import { IntakeFailure } from './failure.ts';
import { rowLimit } from './limits.ts';
import { RowTally } from './row-account.ts';
import { rawOf } from './sample.ts';
import type { ShapeReader } from './shapes/shape-reader.ts';
import { SkippedRows } from './shapes/skipped-row.ts';
import { refusedFields, type RowSink } from './stage.ts';
import type { ScannedRow } from './text/row-scanner.ts';

/** Takes a file row by row: each is judged, counted, and written to the stage. */
export class StageReader {
  readonly tally = new RowTally();
  readonly #shape: ShapeReader;
  readonly #stage: RowSink;
  readonly #headerLine: number;
  readonly #blank = new SkippedRows([]);
  readonly #mostRows: number;
  #isBelowHeader: boolean;
  #rows = 0;

  /** @param headerLine the line of the header, which is no row; 0 where there is none */
  constructor(headerLine: number, shape: ShapeReader, stage: RowSink, mostRows = rowLimit) {
    this.#mostRows = mostRows;
    this.#headerLine = headerLine;
    this.#isBelowHeader = headerLine === 0;
    this.#shape = shape;
    this.#stage = stage;
  }

  /** @throws IntakeFailure where the file has more rows, or names more areas, than are allowed */
  take(row: ScannedRow): void {
    this.#rows += 1;
    if (this.#rows > this.#mostRows) throw tooManyRows(this.#mostRows);
    if (this.#isBelowHeader) this.#judge(row);
    else this.#passHeader(row);
  }

  #passHeader(row: ScannedRow): void {
    this.#isBelowHeader = row.line >= this.#headerLine;
    if (row.line === this.#headerLine) return;
    const reason = row.trouble === null ? this.#blank.reasonFor(row) : null;
    this.tally.skip(reason ?? 'above-header');
  }

  #judge(row: ScannedRow): void {
    const shape = this.#shape;
    for (let outcome = shape.read(row); ;) {
      if (outcome === 'accepted') {
        this.tally.accept(shape.warnings);
        shape.write(this.#stage.rows, row.line);
      } else if (outcome === 'skipped') this.tally.skip(shape.skipReason);
      else this.#refuse(row);
      const next = shape.next();
      if (next === null) return;
      outcome = next;
    }
  }

  #refuse(row: ScannedRow): void {
    const { refusal, part } = this.#shape;
    if (refusal === null) return;
    this.tally.refuse(refusal.reason);
    const { refused } = this.#stage;
    refused.beginRow(refusedFields);
    refused.int4(row.line);
    refused.int2(part);
    refused.text(refusal.reason);
    refused.text(refusal.detail);
    refused.text(rawOf(row));
  }
}

const tooManyRows = (limit: number): IntakeFailure =>
  new IntakeFailure(
    'too-many-rows',
    `The file has more than ${limit.toLocaleString('en')} rows.`,
    'Export a shorter period at a time; uploads of one site add up.',
  );
