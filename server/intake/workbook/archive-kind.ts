import type { ZipEntry } from '../archive/read-zip.ts';
import { wrongKind } from '../file-kind.ts';
import type { IntakeFailure } from '../failure.ts';

const asSheet = 'Open it in a spreadsheet program, save it as XLSX or CSV, and upload that.';
const unpack = 'Unpack it and upload the log that lies in it.';

/** Entries by which other documents that are zip archives are known. */
const entriesOf: readonly { entry: RegExp; kind: string; remedy?: string }[] = [
  { entry: /^word\/document\.xml$/i, kind: 'a DOCX document' },
  { entry: /^ppt\/presentation\.xml$/i, kind: 'a PPTX presentation' },
  { entry: /^xl\/workbook\.bin$/i, kind: 'a binary workbook (XLSB)', remedy: asSheet },
];

/** What the first entry of an OpenDocument archive says (OpenDocument 1.3 part 2, section 3.3). */
const mediaTypes: readonly { type: RegExp; kind: string; remedy?: string }[] = [
  { type: /opendocument\.spreadsheet/, kind: 'an ODS spreadsheet', remedy: asSheet },
  { type: /opendocument\.text/, kind: 'an ODT document' },
  { type: /opendocument\.presentation/, kind: 'an ODP presentation' },
];

const ofWorkbook = /^(?:\[content_types\]\.xml|_rels\/|docprops\/|xl\/)/i;

/** Tells by its entries what an archive is. */
export class ArchiveKind {
  #entries = 0;
  #ofWorkbook = 0;

  /** @throws IntakeFailure where the entry shows that the archive is a document of another kind */
  async see(entry: ZipEntry): Promise<void> {
    this.#entries += 1;
    if (ofWorkbook.test(entry.name)) this.#ofWorkbook += 1;
    const found =
      entriesOf.find((other) => other.entry.test(entry.name)) ??
      (entry.name === 'mimetype' ? await kindOfMediaType(entry) : undefined);
    if (found) throw wrongKind(found.kind, found.remedy);
  }

  /** Whether nothing in it belongs to a workbook. */
  get isForeign(): boolean {
    return this.#entries > 0 && this.#ofWorkbook === 0;
  }
}

async function kindOfMediaType(entry: ZipEntry) {
  for await (const block of entry.blocks()) {
    const told = block.toString('latin1', 0, 200);
    return mediaTypes.find(({ type }) => type.test(told));
  }
  return undefined;
}

/** An archive of anything. */
export const plainZip = (): IntakeFailure => wrongKind('a zip archive', unpack);
