import { IntakeFailure } from '../failure.ts';
import { sheetCellLimit, sheetLimit } from '../limits.ts';
import { localName, type XmlAttributes, type XmlHandler } from '../xml/xml-reader.ts';
import { isDateFormat } from './date-format.ts';
import type { SharedStrings } from './shared-strings.ts';
import { stringText } from './string-text.ts';
import { cellTooLong, saveAgain } from './workbook-failure.ts';

/** Reads the list of sheets and the date system (ECMA-376 part 1, section 18.2). */
export class SheetList implements XmlHandler {
  /** Names of the sheets in their order, each with the relationship that tells where it lies. */
  readonly sheets: { name: string; relation: string }[] = [];
  counts1904 = false;

  open(name: string, attributes: XmlAttributes): void {
    if (name === 'workbookPr') this.counts1904 = /^(?:1|true)$/.test(attributes.date1904 ?? '');
    if (name !== 'sheet') return;
    const relation = Object.entries(attributes).find(([key]) => localName(key) === 'id')?.[1];
    this.sheets.push({ name: stringText(attributes.name ?? ''), relation: relation ?? '' });
    if (this.sheets.length > sheetLimit) throw tooManySheets();
  }

  close(): void {}
}

function tooManySheets(): IntakeFailure {
  const wrong = `The workbook has more than ${sheetLimit.toLocaleString('en')} sheets.`;
  return new IntakeFailure('unpacks-too-large', wrong, saveAgain);
}

/** Reads where related parts lie; of a workbook, those that are sheets of cells. */
export class Relations implements XmlHandler {
  readonly targets = new Map<string, string>();

  open(name: string, attributes: XmlAttributes): void {
    const { Id, Type, Target } = attributes;
    if (name !== 'Relationship' || !Id || !Target || !Type?.endsWith('/worksheet')) return;
    this.targets.set(Id, Target);
    if (this.targets.size > sheetLimit) throw tooManySheets();
  }

  close(): void {}
}

/** Reads which styles of cells show dates or times (ECMA-376 part 1, section 18.8). */
export class Styles implements XmlHandler {
  readonly #codes = new Map<number, string>();
  readonly #formats: number[] = [];
  #list = '';

  open(name: string, attributes: XmlAttributes, depth: number): void {
    if (depth === 1) this.#list = name;
    if (depth !== 2) return;
    const id = Number(attributes.numFmtId ?? 0);
    if (this.#list === 'numFmts') this.#codes.set(id, attributes.formatCode ?? '');
    else if (this.#list === 'cellXfs') this.#formats.push(id);
  }

  close(): void {}

  /** For each style of cells whether it shows a moment. */
  dates(): boolean[] {
    return this.#formats.map((id) => isDateFormat(id, this.#codes.get(id)));
  }
}

/** Reads the texts that cells share, runs of one text together and without readings of its characters. */
export class StringTable implements XmlHandler {
  readonly #strings: SharedStrings;
  #text = '';
  #isText = false;
  #inReading = false;

  constructor(strings: SharedStrings) {
    this.#strings = strings;
  }

  open(name: string): void {
    if (name === 'si') this.#text = '';
    else if (name === 'rPh') this.#inReading = true;
    else this.#isText = name === 't' && !this.#inReading;
  }

  text(text: string): void {
    if (this.#isText) this.#text += text;
  }

  close(name: string): void {
    if (name === 't') this.#isText = false;
    else if (name === 'rPh') this.#inReading = false;
    else if (name === 'si') this.#add(stringText(this.#text));
  }

  #add(text: string): void {
    if (text.length > sheetCellLimit) {
      throw cellTooLong(`A text of the workbook (number ${this.#strings.count + 1})`);
    }
    this.#strings.add(text);
  }
}
