import { optionalColumns, type OptionalColumn } from '../../../shared/contracts/plan.ts';
import type { BinaryCopy } from '../binary-copy.ts';
import { Cell } from '../cell.ts';
import { isPositive, readDecimal, readSmallWhole, type Decimal } from '../decimal.ts';
import { cellLengthLimit, keyLengthLimit } from '../limits.ts';
import { quoteCell, type Refusal } from '../refusal.ts';
import { warningBit } from '../row-account.ts';
import type { ScannedRow } from '../text/row-scanner.ts';
import type { TimeReader } from '../times/time-reader.ts';

const numberWords: Partial<Record<OptionalColumn, string>> = {
  quantity: 'quantity',
  workContent: 'work content',
  value: 'value',
};

/** One mapped column of the row in hand. */
interface OptionalCell {
  readonly column: OptionalColumn;
  readonly place: number;
  readonly cell: Cell;
  isGiven: boolean;
  number: Decimal | null;
  /** The number where it is a small whole one, else -1. */
  smallWhole: number;
  micros: number;
  /** The text with replacement characters, where the bytes were none. */
  replaced: string | null;
}

/** Reads what a row says beside its job, area and times. */
export class OptionalCells {
  warnings = 0;
  readonly #cells: readonly OptionalCell[];
  readonly #reader: TimeReader;

  readonly #decimalSign: '.' | ',';

  constructor(
    places: Partial<Record<OptionalColumn, number>>,
    reader: TimeReader,
    decimalSign: '.' | ',',
  ) {
    this.#reader = reader;
    this.#decimalSign = decimalSign;
    this.#cells = optionalColumns.flatMap((column) => {
      const place = places[column];
      if (place === undefined) return [];
      const empty = { isGiven: false, number: null, smallWhole: -1, micros: NaN, replaced: null };
      return [{ column, place, cell: new Cell(), ...empty }];
    });
  }

  /** The columns of the staging table that `write` fills, in its order. */
  get stagedColumns(): string[] {
    return this.#cells.map(({ column }) => stagedColumn[column] ?? column);
  }

  read(row: ScannedRow): Refusal | null {
    this.warnings = 0;
    for (const each of this.#cells) {
      const refusal = this.#readOne(each, row);
      if (refusal) return refusal;
    }
    return null;
  }

  #readOne(each: OptionalCell, row: ScannedRow): Refusal | null {
    const cell = each.cell.set(row, each.place);
    each.isGiven = !cell.isEmpty;
    if (!each.isGiven) return null;
    if (each.column === 'due') return this.#readDue(each);
    const word = numberWords[each.column];
    return word === undefined ? this.#readText(each) : readNumber(each, word, this.#decimalSign);
  }

  #readDue(due: OptionalCell): Refusal | null {
    const { cell } = due;
    if (cell.isNullWord) {
      due.isGiven = false;
      return null;
    }
    if (this.#reader.read(cell.bytes, cell.start, cell.end) !== null) {
      const detail = `The due date ${quoteCell(cell)} is not a time that can be read.`;
      return { reason: 'unreadable-time', detail };
    }
    due.micros = this.#reader.micros;
    return null;
  }

  #readText(each: OptionalCell): Refusal | null {
    const limit = each.column === 'record' ? keyLengthLimit : cellLengthLimit;
    if (each.cell.isLongerThan(limit)) {
      return { reason: 'cell-too-long', detail: `A cell has more than ${limit} characters.` };
    }
    each.replaced = each.cell.isText ? null : each.cell.lossyText();
    if (each.replaced !== null) this.warnings |= warningBit['unreadable-bytes-elsewhere'];
    return null;
  }

  /**
   * Writes one field for each of `stagedColumns`.
   *
   * @param recordSuffix what makes the row's own id the id of one of its parts
   */
  write(copy: BinaryCopy, recordSuffix = ''): void {
    for (const { isGiven, column, cell, number, smallWhole, micros, replaced } of this.#cells) {
      if (!isGiven) copy.null();
      else if (column === 'record' && recordSuffix !== '') {
        copy.text((replaced ?? cell.lossyText()) + recordSuffix);
      } else if (column === 'due') copy.timestamp(micros);
      else if (smallWhole >= 0) copy.smallWhole(smallWhole);
      else if (number !== null) copy.numeric(number);
      else if (replaced !== null) copy.text(replaced);
      else copy.bytes(cell.bytes, cell.start, cell.end);
    }
  }
}

/** Names of staging columns that differ from those of the plan. */
const stagedColumn: Readonly<Record<string, string>> = {
  record: 'record_key',
  workContent: 'work_content',
};

function readNumber(each: OptionalCell, word: string, decimalSign: '.' | ','): Refusal | null {
  const { cell } = each;
  each.smallWhole = readSmallWhole(cell);
  if (each.smallWhole > 0) return null;
  if (cell.isNullWord) {
    each.isGiven = false;
    return null;
  }
  each.number = readDecimal(cell.lossyText(), decimalSign);
  if (each.number === null) {
    const detail = `The ${word} ${quoteCell(cell)} is not a number that can be read.`;
    return { reason: 'unreadable-number', detail };
  }
  if (each.column === 'quantity' && !isPositive(each.number)) {
    const detail = `The quantity ${quoteCell(cell)} is not above zero.`;
    return { reason: 'quantity-not-positive', detail };
  }
  return null;
}
