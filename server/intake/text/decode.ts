import { isAscii } from 'node:buffer';
import type { Encoding } from '../../../shared/contracts/plan.ts';
import { narrowEncoding, type TextForm } from './recognise-text.ts';

const lineFeed = 0x0a;
const carriageReturn = 0x0d;
/** No byte of UTF-8: stands where a file's own bytes are no text, so that cells tell it. */
const noText = 0xff;

/** Makes the text of one file UTF-8 with line feeds, block by block. */
export class TextDecoding {
  readonly #form: TextForm;
  #decoder: TextDecoder | null;
  #isOpen: boolean;
  #marksLeft: number;

  constructor(form: TextForm) {
    this.#form = form;
    this.#marksLeft = form.markBytes;
    this.#isOpen = form.isOpen;
    this.#decoder = decoderOf(form.encoding);
  }

  /**
   * The next block as UTF-8. A block of UTF-8 is handed on as it is: its line ends may be changed in place.
   *
   * @param isLast whether the file ends with this block
   */
  decode(block: Buffer, isLast: boolean): Buffer {
    const mark = Math.min(this.#marksLeft, block.length);
    this.#marksLeft -= mark;
    const bytes = mark > 0 ? block.subarray(mark) : block;
    if (this.#isOpen && !isAscii(bytes)) {
      this.#isOpen = false;
      this.#decoder = decoderOf(narrowEncoding(bytes));
    }
    const text = this.#decoder ? this.#transcode(this.#decoder, bytes, isLast) : bytes;
    if (this.#form.loneReturns) turnReturns(text);
    return text;
  }

  #transcode(decoder: TextDecoder, bytes: Buffer, isLast: boolean): Buffer {
    const text = decoder.decode(bytes, { stream: !isLast });
    return text.search(unreadable) < 0 ? Buffer.from(text) : markUnreadable(text);
  }
}

const decoderOf = (encoding: Encoding): TextDecoder | null =>
  encoding === 'utf-8' ? null : new TextDecoder(encoding, { ignoreBOM: true });

/** What a decoder gives for bytes that are no text; Windows-1252 leaves five bytes without a character. */
const unreadable = /[\uFFFD\u0081\u008D\u008F\u0090\u009D]/;

function markUnreadable(text: string): Buffer {
  const parts = text.split(new RegExp(unreadable, 'g')).map((part) => Buffer.from(part));
  return Buffer.concat(
    parts.flatMap((part, index) => (index === 0 ? [part] : [Buffer.from([noText]), part])),
  );
}

function turnReturns(text: Buffer): void {
  for (let at = text.indexOf(carriageReturn); at >= 0; at = text.indexOf(carriageReturn, at + 1)) {
    text[at] = lineFeed;
  }
}
