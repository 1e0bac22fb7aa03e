import { IntakeFailure } from './failure.ts';
import type { FileKind } from '../../shared/contracts/plan.ts';

/** How a file of another kind begins, and what such a file is called. */
const beginnings: readonly { bytes: readonly number[]; at?: number; kind: string }[] = [
  { bytes: [0x50, 0x4b, 0x05, 0x06], kind: 'an empty zip archive' },
  { bytes: [0xd0, 0xcf, 0x11, 0xe0, 0xa1, 0xb1, 0x1a, 0xe1], kind: 'an old office document (XLS)' },
  { bytes: [0x25, 0x50, 0x44, 0x46, 0x2d, 0x31, 0x2e], kind: 'a PDF document' },
  { bytes: [0x1f, 0x8b], kind: 'a gzip archive' },
  { bytes: [0x37, 0x7a, 0xbc, 0xaf, 0x27, 0x1c], kind: 'a 7z archive' },
  { bytes: [0x52, 0x61, 0x72, 0x21], kind: 'a RAR archive' },
  { bytes: [0x42, 0x5a, 0x68], kind: 'a bzip2 archive' },
  { bytes: [0xfd, 0x37, 0x7a, 0x58, 0x5a], kind: 'an xz archive' },
  { bytes: [0x28, 0xb5, 0x2f, 0xfd], kind: 'a zstd archive' },
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

const markup = /^\s*(?:<\?xml|<!doctype|<html|<log[\s>]|<!--)/i;
const log = /<log[\s>]/;
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
  const kind = foreignKind(head);
  if (kind === null) return 'text';
  throw new IntakeFailure(
    'wrong-kind',
    `The file is ${kind}, which holds no log that can be read.`,
    'Export the log as CSV, XLSX or XES and upload that.',
  );
}

/** Markup as text: it is told by ASCII alone, so wide encodings only have to lose their zero bytes. */
const asText = (head: Buffer): string =>
  head
    .toString('latin1')
    .replaceAll('\0', '')
    .replace(/^(?:\xFF\xFE|\xFE\xFF|\xEF\xBB\xBF)/, '');

/**
 * What kind of file the first bytes give away, where it is one that holds no delimited text.
 *
 * @returns the kind with its article, for a sentence, or null where it may be delimited text
 */
export function foreignKind(head: Buffer): string | null {
  const found = beginnings.find(({ bytes, at = 0 }) => startsWith(head, bytes, at));
  // A few letters could begin a header: a file of such a kind also holds control bytes early on.
  const isShortWord = found && found.bytes.length < 6 && found.bytes.every(isPrintable);
  if (found && (!isShortWord || hasControlBytes(head))) return found.kind;
  if (markup.test(asText(head.subarray(0, 400)))) return 'an XML or HTML document';
  return null;
}

function startsWith(head: Buffer, bytes: readonly number[], at: number): boolean {
  return bytes.every((byte, index) => head[at + index] === byte);
}

const isPrintable = (byte: number): boolean => byte >= 0x20 && byte < 0x7f;

function hasControlBytes(head: Buffer): boolean {
  return head.subarray(0, 512).some((byte) => byte < 0x09 || (byte > 0x0d && byte < 0x20));
}
