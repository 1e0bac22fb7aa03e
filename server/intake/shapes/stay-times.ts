import { timeColumns, type TimeColumn } from '../../../shared/contracts/plan.ts';
import { Cell } from '../cell.ts';
import { quoteCell, type Refusal } from '../refusal.ts';
import { warningBit } from '../row-account.ts';
import type { ScannedRow } from '../text/row-scanner.ts';
import type { TimeForm, TimeReader, TimeTrouble } from '../times/time-reader.ts';
import type { TimePlaces } from './places.ts';

const words = {
  arrived: 'arrival',
  started: 'start',
  finished: 'finish',
} satisfies Record<TimeColumn, string>;

/** One of the three times of the row in hand; `micros` is NaN where the row does not give it. */
interface StayTime {
  readonly column: TimeColumn;
  /** What it is called in a sentence. */
  readonly word: string;
  readonly place: number;
  readonly cell: Cell;
  micros: number;
  second: number;
  /** The form of the first time in the column. */
  usualForm: TimeForm | null;
}

/** Times outside are refused; microseconds since 1970 UTC. */
export interface TimeBounds {
  earliest: number;
  latest: number;
}

/** Reads arrival, start and finish of a row and holds them to the rules; what it found stays in its fields. */
export class StayTimes {
  warnings = 0;
  /** The earliest and the latest of the times, in microseconds since 1970 UTC. */
  first = NaN;
  latest = NaN;
  readonly #times: readonly StayTime[];
  readonly #reader: TimeReader;
  readonly #bounds: TimeBounds;

  /** @param word what its only time is called, where it is not told what kind of time it is */
  constructor(places: TimePlaces, reader: TimeReader, bounds: TimeBounds, word?: string) {
    this.#reader = reader;
    this.#bounds = bounds;
    this.#times = timeColumns.map((column) => ({
      column,
      word: word ?? words[column],
      place: places[column] ?? -1,
      cell: new Cell(),
      micros: NaN,
      second: NaN,
      usualForm: null,
    }));
  }

  /** Microseconds since 1970 UTC, NaN where the row does not give it. */
  of(index: number): number {
    return (this.#times[index] as StayTime).micros;
  }

  /** Bits of the warnings that a start or a finish is missing. */
  get missing(): number {
    const noStart = Number.isNaN(this.of(1)) ? warningBit['no-start'] : 0;
    return noStart | (Number.isNaN(this.of(2)) ? warningBit['no-finish'] : 0);
  }

  /** Of an only time at a local time that occurs twice, the second moment; else NaN. */
  get second(): number {
    return this.#times.find(({ place }) => place >= 0)?.second ?? NaN;
  }

  /** The three times in microseconds since 1970 UTC. */
  told(): Record<TimeColumn, number> {
    return { arrived: this.of(0), started: this.of(1), finished: this.of(2) };
  }

  /** Whether the row holds anything in the columns of these times. */
  isFilled(row: ScannedRow): boolean {
    return this.#times.some(({ place, cell }) => {
      if (place < 0) return false;
      cell.set(row, place);
      return !cell.isEmpty && !cell.isNullWord;
    });
  }

  read(row: ScannedRow): Refusal | null {
    this.warnings = 0;
    for (const time of this.#times) {
      const refusal = this.#readOne(time, row);
      if (refusal) return refusal;
    }
    return this.#chooseOccurrences() ?? this.#checkBounds();
  }

  #readOne(time: StayTime, row: ScannedRow): Refusal | null {
    time.micros = time.second = NaN;
    if (time.place < 0) return null;
    const cell = time.cell.set(row, time.place);
    if (cell.isEmpty || cell.isNullWord) return null;
    const reader = this.#reader;
    const trouble = reader.read(cell.bytes, cell.start, cell.end);
    if (trouble) return this.#refuseUnreadable(time, trouble);
    time.micros = reader.micros;
    time.second = reader.second;
    time.usualForm ??= reader.form;
    if (reader.form !== time.usualForm) this.warnings |= warningBit['mixed-time-forms'];
    if (reader.skipped) this.warnings |= warningBit['skipped-local-time'];
    if (!Number.isNaN(reader.second)) this.warnings |= warningBit['ambiguous-local-time'];
    return null;
  }

  #refuseUnreadable({ word, cell }: StayTime, trouble: TimeTrouble): Refusal {
    if (!cell.isText) {
      return { reason: 'unreadable-bytes', detail: `The ${word} ${quoteCell(cell)} is no text.` };
    }
    return trouble === 'unreadable'
      ? {
          reason: 'unreadable-time',
          detail: `The ${word} ${quoteCell(cell)} is not a time that can be read.`,
        }
      : {
          reason: 'contradicts-date-order',
          detail: `The ${word} ${quoteCell(cell)} cannot be read in the order of day and month that the file uses.`,
        };
  }

  /**
   * A local time that occurs twice means its first occurrence, unless only the second does not precede
   * the time before it.
   */
  #chooseOccurrences(): Refusal | null {
    let before: StayTime | null = null;
    this.first = NaN;
    for (const time of this.#times) {
      if (Number.isNaN(time.micros)) continue;
      if (before && time.micros < before.micros) {
        if (!(time.second >= before.micros)) return refuseOrder(time, before);
        time.micros = time.second;
      }
      if (before === null) this.first = time.micros;
      this.latest = time.micros;
      before = time;
    }
    if (before === null) return { reason: 'no-time', detail: 'The row holds no time.' };
    return null;
  }

  #checkBounds(): Refusal | null {
    const { earliest, latest } = this.#bounds;
    if (this.first >= earliest && this.latest <= latest) return null;
    for (const { word, cell, micros } of this.#times) {
      const told = `The ${word} ${quoteCell(cell)}`;
      if (micros < earliest) {
        return { reason: 'time-before-1950', detail: `${told} lies before 1950.` };
      }
      if (micros > latest) {
        const detail = `${told} lies more than a day after the file was received.`;
        return { reason: 'time-after-receipt', detail };
      }
    }
    return null;
  }
}

function refuseOrder(time: StayTime, before: StayTime): Refusal {
  const told = `The ${time.word} ${quoteCell(time.cell)} lies before the ${before.word} ${quoteCell(before.cell)}.`;
  if (time.column === 'started') return { reason: 'start-before-arrival', detail: told };
  const reason = before.column === 'started' ? 'finish-before-start' : 'finish-before-arrival';
  return { reason, detail: told };
}
