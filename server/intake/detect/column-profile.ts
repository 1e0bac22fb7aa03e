import { wordsOf } from './column-words.ts';
import { readDecimal } from '../decimal.ts';
import type { Sample } from './choose-cut.ts';
import { isDigits, isTime, isWrittenTime } from './time-like.ts';

/** What the cells of one column of a sample look like. Shares are of the cells that are not blank. */
export interface ColumnProfile {
  place: number;
  header: string;
  words: readonly string[];
  /** Cells that are not blank. */
  filled: number;
  /** Written as dates and times, which nothing else is. */
  timeShare: number;
  /** Digits that may be a time: serials, epochs and compact dates. */
  digitTimeShare: number;
  /** Times, and what looks like one written in a way that is not read: 05-JAN-26, 8h15. */
  timeLikeShare: number;
  numberShare: number;
  distinctShare: number;
  distinct: number;
  cells: readonly string[];
}

const numbersApart = /\d\D+\d/;

/** Looks at each column of a sample. */
export function profileColumns({ header, rows }: Sample): ColumnProfile[] {
  return header.map((name, place) => {
    const cells = rows.map(({ cells: row }) => (row[place] ?? '').trim());
    const filled = cells.filter((cell) => cell !== '' && cell.toLowerCase() !== 'null');
    const share = (fits: (cell: string) => boolean): number =>
      filled.length === 0 ? 0 : filled.filter(fits).length / filled.length;
    const distinct = new Set(filled).size;
    return {
      place,
      header: name,
      words: wordsOf(name),
      filled: filled.length,
      timeShare: share(isWrittenTime),
      digitTimeShare: share((cell) => isDigits(cell) && isTime(cell)),
      timeLikeShare: share((cell) => isTime(cell) || (!isDigits(cell) && numbersApart.test(cell))),
      numberShare: share(isNumber),
      distinctShare: filled.length === 0 ? 0 : distinct / filled.length,
      distinct,
      cells,
    };
  });
}

const isNumber = (cell: string): boolean =>
  readDecimal(cell, '.') !== null || readDecimal(cell, ',') !== null;

/** Share of cells from which a column counts as holding something of a kind: exports have slips. */
export const mostly = 0.8;

/** Whether the column holds dates and times, beyond doubt. */
export const holdsTimes = ({ timeShare }: ColumnProfile): boolean => timeShare >= mostly;

/** Whether a column whose header says that it holds times may do so, however badly it is written. */
export const looksLikeTimes = (column: ColumnProfile): boolean =>
  column.filled === 0 || column.timeLikeShare >= 0.5;

/** Whether the column may hold times: also digits, or nothing as yet. */
export const mayHoldTimes = (column: ColumnProfile): boolean =>
  column.filled === 0 || column.timeShare + column.digitTimeShare >= mostly;
