import { BuiltRow } from '../built-row.ts';
import { Cell } from '../cell.ts';
import { sheetCellLimit, sheetRowLimit } from '../limits.ts';
import type { OnRow, RowsWanted } from '../opened-file.ts';
import { cellsOf } from '../sample.ts';
import type { XmlAttributes, XmlHandler } from '../xml/xml-reader.ts';
import { columnOf } from './cell-place.ts';
import { numberText } from './number-text.ts';
import { SerialText } from './serial-text.ts';
import { stringText } from './string-text.ts';
import { brokenWorkbook, cellTooLong } from './workbook-failure.ts';
import type { WorkbookParts } from './workbook-parts.ts';

/**
 * Reads the rows of a sheet (ECMA-376 part 1, section 18.3). A row begins at its number; cells that are not
 * there are empty, and every row is as wide as the header, or wider where a cell beyond it holds anything.
 */
export class SheetRows implements XmlHandler {
  isDone = false;
  readonly #parts: WorkbookParts;
  readonly #width: number;
  readonly #decimalSign: string;
  readonly #onRow: OnRow;
  readonly #row = new BuiltRow(asCsv);
  readonly #cell = new Cell();
  readonly #serials: SerialText;
  #line = 0;
  #place = -1;
  #type = 'n';
  #isDate = false;
  #value = '';
  #isValue = false;
  #inReading = false;

  constructor(parts: WorkbookParts, wanted: RowsWanted, onRow: OnRow) {
    this.#parts = parts;
    this.#width = wanted.header.length;
    this.#decimalSign = wanted.plan?.decimalSign ?? '.';
    this.#onRow = onRow;
    this.#serials = new SerialText(parts.dateSystem);
  }

  open(name: string, attributes: XmlAttributes): void {
    switch (name) {
      case 'c':
        return this.#openCell(attributes);
      case 'v':
        this.#isValue = true;
        return;
      case 't':
        this.#isValue = !this.#inReading;
        return;
      case 'row':
        return this.#openRow(attributes.r);
      case 'rPh':
        this.#inReading = true;
    }
  }

  text(text: string): void {
    if (this.#isValue) this.#value += text;
  }

  close(name: string): void {
    switch (name) {
      case 'v':
      case 't':
        this.#isValue = false;
        return;
      case 'c':
        if (this.#value !== '') this.#closeCell();
        return;
      case 'row':
        return this.#closeRow();
      case 'rPh':
        this.#inReading = false;
        return;
      case 'sheetData':
        this.isDone = true;
    }
  }

  #openRow(number: string | undefined): void {
    const line = number === undefined ? this.#line + 1 : Number(number);
    if (!Number.isInteger(line) || line <= this.#line) {
      throw brokenWorkbook(`Behind row ${this.#line} the rows of the sheet are out of order.`);
    }
    if (line > sheetRowLimit) {
      const most = sheetRowLimit.toLocaleString('en');
      throw brokenWorkbook(`The sheet has more than ${most} rows, the most that a sheet holds.`);
    }
    this.#line = line;
    this.#place = -1;
    this.#row.begin(line);
  }

  #openCell({ r, t, s }: XmlAttributes): void {
    this.#place = r === undefined ? this.#place + 1 : columnOf(r);
    if (this.#place < 0) {
      throw brokenWorkbook(`Row ${this.#line} of the sheet holds a cell that lies nowhere.`);
    }
    this.#type = t ?? 'n';
    this.#isDate = s !== undefined && this.#parts.dateStyles[Number(s)] === true;
    this.#value = '';
  }

  #closeCell(): void {
    const value = this.#value;
    if (value.length > sheetCellLimit) throw cellTooLong(`A cell of row ${this.#line}`);
    switch (this.#type) {
      case 's':
        return this.#setShared(Number(value));
      case 'n':
        return this.#row.set(this.#place, this.#numberText(value));
      case 'b':
        return this.#row.set(this.#place, value === '0' || value === 'false' ? 'FALSE' : 'TRUE');
      default:
        return this.#row.set(this.#place, stringText(value));
    }
  }

  #setShared(index: number): void {
    const { strings } = this.#parts;
    if (!(Number.isInteger(index) && index >= 0 && index < strings.count)) {
      throw brokenWorkbook(`Row ${this.#line} asks for a text that the workbook does not hold.`);
    }
    strings.find(index, this.#takeShared);
  }

  readonly #takeShared = (page: Buffer, start: number, end: number): void => {
    if (end > start) this.#row.setBytes(this.#place, page, start, end);
  };

  #numberText(value: string): string {
    const moment = this.#isDate ? this.#serials.write(Number(value)) : null;
    if (moment !== null) return moment;
    const text = numberText(value);
    return this.#decimalSign === '.' ? text : text.replace('.', this.#decimalSign);
  }

  #closeRow(): void {
    const row = this.#row;
    if (row.count > 0) row.resize(Math.max(this.#filledWidth(), this.#width));
    // A row without a cell that holds anything is one blank cell, as a blank line is.
    else row.resize(1);
    if (this.#onRow(row) === false) this.isDone = true;
  }

  /** How many cells there are up to the last one that holds more than blanks. */
  #filledWidth(): number {
    const row = this.#row;
    let count = row.count;
    while (count > this.#width && count <= row.starts.length) {
      if (!this.#cell.set(row, count - 1).isEmpty) break;
      count -= 1;
    }
    return count;
  }
}

const needsQuotes = /[",\r\n]/;

/** A row as comma-separated text (RFC 4180). */
const asCsv = (row: BuiltRow): string =>
  cellsOf(row)
    .map((cell) => (needsQuotes.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell))
    .join(',');
