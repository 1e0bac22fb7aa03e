import { setImmediate } from 'node:timers/promises';
import { RowTally } from './row-account.ts';
import { RowScanner, type ScannedRow } from './row-scanner.ts';
import { rawOf } from './sample.ts';
import { SkippedRows } from './shapes/skipped-row.ts';
import type { StayRow } from './shapes/stay-row.ts';
import { refusedFields, type RowSink } from './stage.ts';

/** Reads text block by block: each row is judged, counted, and written to the stage. */
export class StageReader {
  readonly tally = new RowTally();
  readonly #scanner: RowScanner;
  readonly #stayRow: StayRow;
  readonly #stage: RowSink;
  readonly #fields: number;
  readonly #blank = new SkippedRows([]);
  #hasHeader = false;

  constructor(delimiter: string, stayRow: StayRow, stage: RowSink) {
    this.#scanner = new RowScanner(delimiter);
    this.#stayRow = stayRow;
    this.#stage = stage;
    this.#fields = stayRow.stagedColumns.length;
  }

  /** @param isLast whether the text ends with this block */
  async read(text: Buffer, isLast: boolean): Promise<void> {
    this.#scanner.scan(text, isLast, (row) =>
      this.#hasHeader ? this.#judge(row) : this.#passHeader(row),
    );
    await this.#stage.sendFull();
    // Lets what is on its way move: judging rows never waits by itself.
    await setImmediate();
  }

  /** The first row that holds anything is the header, which is no row. */
  #passHeader(row: ScannedRow): void {
    const reason = row.trouble === null ? this.#blank.reasonFor(row) : null;
    if (reason === null) this.#hasHeader = true;
    else this.tally.skip(reason);
  }

  #judge(row: ScannedRow): void {
    const stayRow = this.#stayRow;
    switch (stayRow.read(row)) {
      case 'accepted':
        this.tally.accept(stayRow.warnings);
        stayRow.write(this.#stage.rows, row.line, this.#fields);
        break;
      case 'skipped':
        this.tally.skip(stayRow.skipReason);
        break;
      case 'refused':
        this.#refuse(row);
    }
  }

  #refuse(row: ScannedRow): void {
    const { refusal } = this.#stayRow;
    if (refusal === null) return;
    this.tally.refuse(refusal.reason);
    const { refused } = this.#stage;
    refused.beginRow(refusedFields);
    refused.int4(row.line);
    refused.text(refusal.reason);
    refused.text(refusal.detail);
    refused.text(rawOf(row));
  }
}
