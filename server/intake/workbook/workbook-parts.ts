import path from 'node:path/posix';
import { ZipReader, type ZipEntry } from '../archive/read-zip.ts';
import { IntakeFailure } from '../failure.ts';
import { partByteLimit } from '../limits.ts';
import type { Opener } from '../opened-file.ts';
import type { DateSystem } from '../times/auto-time-reader.ts';
import { XmlReader, type XmlAttributes, type XmlHandler } from '../xml/xml-reader.ts';
import { ArchiveKind, plainZip } from './archive-kind.ts';
import { Relations, SheetList, StringTable, Styles } from './part-handlers.ts';
import { SharedStrings } from './shared-strings.ts';
import { brokenWorkbook, partSubject } from './workbook-failure.ts';

/** A sheet of cells, and the entry of the archive in which it lies, in small letters. */
export interface SheetPlace {
  name: string;
  part: string;
}

/** What has to be known of a workbook before its cells can be read. */
export interface WorkbookParts {
  sheets: SheetPlace[];
  dateSystem: DateSystem;
  strings: SharedStrings;
  /** For each style whether it shows a moment. */
  dateStyles: readonly boolean[];
}

/** The parts as they are found, whatever their names: a part is known by its root element. */
class FoundParts {
  readonly kind = new ArchiveKind();
  readonly strings = new SharedStrings();
  readonly relations = new Map<string, Relations>();
  list: { part: string; handler: SheetList } | null = null;
  styles: Styles | null = null;
  /** The first part that could not be read before its root told what it is. */
  unread: IntakeFailure | null = null;

  handlerOf(root: string, part: string): XmlHandler | null {
    switch (root) {
      case 'workbook':
        return (this.list ??= { part, handler: new SheetList() }).handler;
      case 'Relationships': {
        const handler = new Relations();
        this.relations.set(part, handler);
        return handler;
      }
      case 'styleSheet':
        return (this.styles ??= new Styles());
      case 'sst':
        return new StringTable(this.strings);
      default:
        return null;
    }
  }
}

/**
 * Reads through a workbook once for everything but its cells.
 *
 * @throws IntakeFailure where it is broken, or an archive of another kind
 */
export async function readWorkbookParts(open: Opener): Promise<WorkbookParts> {
  const found = new FoundParts();
  try {
    for await (const entry of new ZipReader(open()).entries()) {
      await found.kind.see(entry);
      if (/\.(?:xml|rels)$/i.test(entry.name)) await readPart(entry, found);
    }
  } catch (error) {
    throw found.kind.isForeign && isNotNamed(error) ? plainZip() : error;
  }
  return whole(found);
}

const isNotNamed = (error: unknown): boolean =>
  error instanceof IntakeFailure && error.code !== 'wrong-kind';

async function readPart(entry: ZipEntry, found: FoundParts): Promise<void> {
  const handler = new ByRoot(entry.name.toLowerCase(), found);
  const reader = new XmlReader(handler, partSubject(entry.name));
  try {
    for await (const block of entry.blocks()) {
      reader.write(block);
      if (reader.isDone) return;
      handler.count(block.length);
    }
    reader.end();
  } catch (error) {
    if (handler.isKnown || !isOfXml(error)) throw error;
    if (!ofNoUse.test(entry.name)) found.unread ??= error;
  }
}

/** Properties, and data that programs put beside a workbook. */
const ofNoUse = /^(?:docProps|customXml)\//i;

const isOfXml = (error: unknown): error is IntakeFailure =>
  error instanceof IntakeFailure &&
  /^(?:unsafe-xml|unsupported-encoding|broken-file)$/.test(error.code);

/** Hands a part to the handler of its root element. */
class ByRoot implements XmlHandler {
  isDone = false;
  readonly #part: string;
  readonly #found: FoundParts;
  #handler: XmlHandler | null = null;
  #bytes = 0;

  constructor(part: string, found: FoundParts) {
    this.#part = part;
    this.#found = found;
  }

  get isKnown(): boolean {
    return this.#handler !== null;
  }

  count(bytes: number): void {
    this.#bytes += bytes;
    if (this.#bytes <= partByteLimit || this.#handler instanceof StringTable) return;
    throw brokenWorkbook(
      `The part “${this.#part}” of the workbook holds more than ${partByteLimit / 1_048_576} MiB.`,
    );
  }

  open(name: string, attributes: XmlAttributes, depth: number): void {
    if (depth > 0) return this.#handler?.open(name, attributes, depth);
    this.#handler = this.#found.handlerOf(name, this.#part);
    this.isDone = this.#handler === null;
  }

  text(text: string): void {
    this.#handler?.text?.(text);
  }

  close(name: string, depth: number): void {
    this.#handler?.close(name, depth);
  }
}

function whole({ kind, list, unread, relations, styles, strings }: FoundParts): WorkbookParts {
  if (list === null) {
    if (kind.isForeign) throw plainZip();
    throw unread ?? brokenWorkbook('The archive holds no list of sheets, as a workbook does.');
  }
  if (unread !== null) throw unread;
  const folder = path.dirname(list.part);
  const targets = relations.get(path.join(folder, '_rels', `${path.basename(list.part)}.rels`));
  const sheets = list.handler.sheets.flatMap(({ name, relation }) => {
    const target = targets?.targets.get(relation);
    return target === undefined ? [] : [{ name, part: partOf(folder, target) }];
  });
  if (sheets.length === 0) throw brokenWorkbook('The workbook has no sheet of cells.');
  const dateSystem = list.handler.counts1904 ? 1904 : 1900;
  return { sheets, dateSystem, strings, dateStyles: styles?.dates() ?? [] };
}

const partOf = (folder: string, target: string): string =>
  (target.startsWith('/') ? target.slice(1) : path.join(folder, target)).toLowerCase();
