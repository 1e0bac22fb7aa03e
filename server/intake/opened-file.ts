import type { ColumnPlan, Delimiter, FileKind } from '../../shared/contracts/plan.ts';
import type { SampleRow } from './sample.ts';
import type { ScannedRow } from './text/row-scanner.ts';
import type { DateSystem } from './times/auto-time-reader.ts';

/** Begins to read a file from its first byte, as often as it is called. */
export type Opener = () => AsyncIterable<Buffer>;

/** Takes one row; false stops the reading. The row is the same object each time: copy what is to last. */
export type OnRow = (row: ScannedRow) => boolean | void;

/** One way to cut a file into rows and cells. Text can be cut at several characters, others in one way. */
export interface Cut {
  delimiter: Delimiter | null;
  /** The first rows of the file, or of the sheet, blank ones left out. */
  rows: SampleRow[];
}

/** What a reading of all rows is told. */
export interface RowsWanted {
  delimiter: Delimiter | null;
  /** The header's cells: where a kind of file leaves out empty cells, rows are made as wide as it. */
  header: readonly string[];
  /** Numbers of a workbook are written with the decimal sign that the plan reads. */
  plan?: Pick<ColumnPlan, 'decimalSign'> | null;
}

/** A file whose beginning was looked at, and which can be read as a whole, as often as is wanted. */
export interface OpenedFile {
  kind: FileKind;
  /** What it settles of a plan: the encoding of a text, the sheet of a workbook. */
  settled: Pick<ColumnPlan, 'encoding' | 'sheet'>;
  /** Names of the sheets of a workbook; else empty. */
  sheets: readonly string[];
  /** By which serial numbers of its cells count days. */
  dateSystem: DateSystem;
  cuts: readonly Cut[];
  /**
   * The line of the header where the kind of file says which it is, else null: of an event log 0, since its
   * attributes' keys are the header and stand on no line.
   */
  headerLine: number | null;
  /**
   * Calls `onRow` for each row, and yields how many bytes of the file were taken after each block, so that
   * the caller can wait, tell of progress, or stop.
   *
   * @throws IntakeFailure with a sentence where the file cannot be read on
   */
  rows(wanted: RowsWanted, onRow: OnRow): AsyncGenerator<number>;
}
