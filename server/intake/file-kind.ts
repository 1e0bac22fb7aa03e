import { IntakeFailure } from './failure.ts';
import type { FileKind } from '../../shared/contracts/plan.ts';

const unpack = 'Unpack it and upload the log that lies in it.';
const saveSheet = 'Open it in a spreadsheet program, save it as XLSX or CSV, and upload that.';

/** What a file is called in a sentence, with its article, and what to do with it. */
interface NamedKind {
  kind: string;
  remedy?: string;
}

/** How a file of another kind begins. */
const beginnings: readonly (NamedKind & { bytes: readonly number[]; at?: number })[] = [
  { bytes: [0x50, 0x4b, 0x05, 0x06], kind: 'an empty zip archive' },
  { bytes: [0x25, 0x50, 0x44, 0x46, 0x2d, 0x31, 0x2e], kind: 'a PDF document' },
  { bytes: [0x1f, 0x8b], kind: 'a gzip archive', remedy: unpack },
  { bytes: [0x37, 0x7a, 0xbc, 0xaf, 0x27, 0x1c], kind: 'a 7z archive', remedy: unpack },
  { bytes: [0x52, 0x61, 0x72, 0x21], kind: 'a RAR archive', remedy: unpack },
  { bytes: [0x42, 0x5a, 0x68], kind: 'a bzip2 archive', remedy: unpack },
  { bytes: [0xfd, 0x37, 0x7a, 0x58, 0x5a], kind: 'an xz archive', remedy: unpack },
  { bytes: [0x28, 0xb5, 0x2f, 0xfd], kind: 'a zstd archive', remedy: unpack },
  { bytes: [0x89, 0x50, 0x4e, 0x47], kind: 'a PNG picture' },
  { bytes: [0xff, 0xd8, 0xff], kind: 'a JPEG picture' },
  { bytes: [0x47, 0x49, 0x46, 0x38], kind: 'a GIF picture' },
  { bytes: [0x42, 0x4d], kind: 'a BMP picture' },
  { bytes: [0x49, 0x49, 0x2a, 0x00], kind: 'a TIFF picture' },
  { bytes: [0x4d, 0x4d, 0x00, 0x2a], kind: 'a TIFF picture' },
  { bytes: [0x57, 0x45, 0x42, 0x50], at: 8, kind: 'a WebP picture' },
  { bytes: [0x53, 0x51, 0x4c, 0x69, 0x74, 0x65], kind: 'an SQLite database' },
  { bytes: [0x50, 0x41, 0x52, 0x31], kind: 'a Parquet file' },
  { bytes: [0x7f, 0x45, 0x4c, 0x46], kind: 'a program' },
  { bytes: [0x4d, 0x5a, 0x90, 0x00], kind: 'a program' },
];

/** Compound files of Microsoft (MS-CFB) by the names of the streams in them, which are in UTF-16. */
const compound = [0xd0, 0xcf, 0x11, 0xe0, 0xa1, 0xb1, 0x1a, 0xe1];
const streams: readonly (NamedKind & { stream: string })[] = [
  { stream: 'Workbook', kind: 'an old workbook (XLS)', remedy: saveSheet },
  { stream: 'Book', kind: 'an old workbook (XLS)', remedy: saveSheet },
  { stream: 'WordDocument', kind: 'an old text document (DOC)' },
  { stream: 'PowerPoint Document', kind: 'an old presentation (PPT)' },
];

/** Documents of markup by what their beginning holds. */
const documents: readonly (NamedKind & { holds: RegExp })[] = [
  { holds: /<!doctype\s+html|<html[\s>]/i, kind: 'an HTML page', remedy: saveSheet },
  {
    holds:
      /<\?mso-application\s+progid="Excel\.Sheet"|urn:schemas-microsoft-com:office:spreadsheet/i,
    kind: 'a workbook in XML of 2003',
    remedy: saveSheet,
  },
  { holds: /opendocument:xmlns:office/i, kind: 'an OpenDocument in one file', remedy: saveSheet },
];

/** A declaration, a comment or a tag; a header may name its columns within angle brackets. */
const markup =
  /^\s*(?:<\?xml|<!doctype|<!--|<[a-z][\w.-]*(?::[\w.-]+)?(?:\s[^<>]*)?\/?>(?![,;|\t]))/i;
const log = /<(?:[\w.-]+:)?log[\s>]/;
const json = /^\s*(?:\{\s*["}]|\[\s*[[{"\]])/;
/** Characters in which the root element of a markup document is looked for. */
const rootWithin = 4000;

const zip = [0x50, 0x4b, 0x03, 0x04];

/** Whether a file is a zip archive, as workbooks are. */
export const isZip = (head: Buffer): boolean => startsWith(head, zip, 0);

/**
 * The kind of a file by its first bytes, whatever its name or the sender say.
 *
 * @throws IntakeFailure that names what the file is, where it is of a kind that is not read
 */
export function kindOfFile(head: Buffer): FileKind {
  if (isZip(head)) return 'workbook';
  const text = asText(head.subarray(0, rootWithin));
  if (markup.test(text) && log.test(text)) return 'xes';
  refuseProtected(head);
  const found = foreignKind(head, text);
  if (found) throw wrongKind(found.kind, found.remedy);
  return 'text';
}

/** The refusal of a file that is of another kind than can be read, by its name with an article. */
export const wrongKind = (
  kind: string,
  remedy = 'Export the log as CSV, XLSX or XES and upload that.',
): IntakeFailure =>
  new IntakeFailure('wrong-kind', `The file is ${kind}, which is not read.`, remedy);

/** Markup as text: it is told by ASCII alone, so wide encodings only have to lose their zero bytes. */
const asText = (head: Buffer): string =>
  head
    .toString('latin1')
    .replaceAll('\0', '')
    .replace(/^(?:\xFF\xFE|\xFE\xFF|\xEF\xBB\xBF)/, '');

/** A protected workbook is a compound file in which the archive lies encrypted (MS-OFFCRYPTO 2.3.1). */
function refuseProtected(head: Buffer): void {
  if (!startsWith(head, compound, 0) || !holdsStream(head, 'EncryptedPackage')) return;
  throw new IntakeFailure(
    'protected-file',
    'The workbook is protected by a password.',
    'Save it without the password and upload that.',
  );
}

const holdsStream = (head: Buffer, name: string): boolean => head.includes(name, 0, 'utf16le');

/** What the first bytes give away of a file that holds no delimited text; null where it may hold some. */
function foreignKind(head: Buffer, text: string): NamedKind | null {
  if (startsWith(head, compound, 0)) {
    const other = { kind: 'an old office document (XLS, DOC or PPT)', remedy: saveSheet };
    return streams.find(({ stream }) => holdsStream(head, stream)) ?? other;
  }
  const found = beginnings.find(({ bytes, at = 0 }) => startsWith(head, bytes, at));
  // A few letters could begin a header: a file of such a kind also holds control bytes early on.
  const isShortWord = found && found.bytes.length < 6 && found.bytes.every(isPrintable);
  if (found && (!isShortWord || hasControlBytes(head))) return found;
  if (json.test(text)) return { kind: 'a JSON document' };
  if (!markup.test(text)) return null;
  return documents.find(({ holds }) => holds.test(text)) ?? { kind: 'an XML document' };
}

function startsWith(head: Buffer, bytes: readonly number[], at: number): boolean {
  return bytes.every((byte, index) => head[at + index] === byte);
}

const isPrintable = (byte: number): boolean => byte >= 0x20 && byte < 0x7f;

function hasControlBytes(head: Buffer): boolean {
  return head.subarray(0, 512).some((byte) => byte < 0x09 || (byte > 0x0d && byte < 0x20));
}
