import { SaxesParser } from 'saxes';
import { IntakeFailure } from '../failure.ts';
import { xmlDepthLimit, xmlPieceLimit } from '../limits.ts';
import { declaredWithin, xmlDecoder } from './xml-encoding.ts';

export type XmlAttributes = Readonly<Record<string, string>>;

/** Takes what stands in an XML document. Names come without their prefixes. */
export interface XmlHandler {
  /** Set once it has seen enough: the rest of the document is not looked at. */
  readonly isDone?: boolean;
  /** @param depth how many elements it lies in; 0 for the root */
  open(name: string, attributes: XmlAttributes, depth: number): void;
  text?(text: string): void;
  close(name: string, depth: number): void;
}

/** What a document is called in a sentence, and what to do where it cannot be read. */
export interface XmlSubject {
  /** At the beginning of a sentence. */
  name: string;
  remedy: string;
}

/**
 * Reads XML block by block in constant memory, strictly (saxes). It resolves the five entities that XML knows
 * by itself and references to characters; a document type declaration, which could declare more, is refused.
 */
export class XmlReader {
  readonly #parser = new SaxesParser({ xmlns: false, position: false });
  readonly #subject: XmlSubject;
  readonly #handler: XmlHandler;
  #decoder: TextDecoder | null = null;
  /** The first bytes, as long as they may not yet hold the whole declaration. */
  #first: Buffer = Buffer.alloc(0);
  #depth = 0;
  /** Characters since the last tag. */
  #piece = 0;

  constructor(handler: XmlHandler, subject: XmlSubject) {
    this.#handler = handler;
    this.#subject = subject;
    const parser = this.#parser;
    parser.on('error', (error) => this.#fail(error.message));
    parser.on('doctype', () => this.#refuse('brings a document type declaration (DOCTYPE)'));
    parser.on('opentag', ({ name, attributes }) => this.#open(name, attributes));
    parser.on('closetag', ({ name }) => this.#close(name));
    if (handler.text) {
      parser.on('text', (text) => {
        if (!this.isDone) handler.text?.(text);
      });
    }
  }

  get isDone(): boolean {
    return this.#handler.isDone === true;
  }

  /** The line on which the document was read to, from 1. */
  get line(): number {
    return this.#parser.line;
  }

  /** @throws IntakeFailure where it is no proper XML, asks for more than is read, or is beyond the limits */
  write(block: Buffer): void {
    if (this.isDone) return;
    const bytes = this.#first.length > 0 ? Buffer.concat([this.#first, block]) : block;
    if (this.#decoder === null && bytes.length < declaredWithin) {
      this.#first = bytes;
      return;
    }
    this.#first = Buffer.alloc(0);
    this.#parse(bytes, true);
  }

  /** @throws IntakeFailure where the document breaks off */
  end(): void {
    if (this.isDone) return;
    this.#parse(this.#first, false);
    if (!this.isDone) this.#parser.close();
  }

  #parse(bytes: Buffer, goesOn: boolean): void {
    const text = this.#decode(bytes, goesOn);
    this.#piece += text.length;
    this.#parser.write(text);
    if (this.#piece > xmlPieceLimit && !this.isDone) {
      this.#refuse(`holds a piece longer than ${xmlPieceLimit.toLocaleString('en')} characters`);
    }
  }

  #decode(bytes: Buffer, goesOn: boolean): string {
    this.#decoder ??= xmlDecoder(bytes);
    try {
      return this.#decoder.decode(bytes, { stream: goesOn });
    } catch {
      throw new IntakeFailure(
        'unsupported-encoding',
        `${this.#subject.name} holds bytes behind line ${this.line} that are no text in ${this.#decoder.encoding.toUpperCase()}.`,
        'Export it in UTF-8 and upload that.',
      );
    }
  }

  #open(name: string, attributes: XmlAttributes): void {
    this.#piece = 0;
    if (this.isDone) return;
    if (this.#depth >= xmlDepthLimit) {
      this.#refuse(`nests elements more than ${xmlDepthLimit} deep`);
    }
    this.#handler.open(localName(name), attributes, this.#depth);
    this.#depth += 1;
  }

  #close(name: string): void {
    this.#piece = 0;
    if (this.isDone) return;
    this.#depth -= 1;
    this.#handler.close(localName(name), this.#depth);
  }

  #fail(message: string): void {
    if (this.isDone) return;
    const { name, remedy } = this.#subject;
    if (message.startsWith('undefined entity')) {
      this.#refuse('uses an entity beyond the five that XML knows by itself');
    }
    throw new IntakeFailure(
      'broken-file',
      `${name} is no proper XML at line ${this.line}: ${message.replace(/\.$/, '')}.`,
      remedy,
    );
  }

  #refuse(what: string): never {
    const { name, remedy } = this.#subject;
    throw new IntakeFailure('unsafe-xml', `${name} ${what} at line ${this.line}.`, remedy);
  }
}

/** The name of an element or attribute without its prefix. */
export const localName = (name: string): string => name.slice(name.indexOf(':') + 1);
