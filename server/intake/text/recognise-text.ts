import { isAscii, isUtf8 } from 'node:buffer';
import type { Encoding } from '../../../shared/contracts/plan.ts';
import { IntakeFailure } from '../failure.ts';

/** How the bytes of a file become text: its encoding, the bytes before the text, and what ends a line. */
export interface TextForm {
  encoding: Encoding;
  /** Whether only ASCII was seen, so that the first byte beyond it has yet to tell the encoding. */
  isOpen: boolean;
  /** Length of the byte order mark at the beginning of the file. */
  markBytes: number;
  /** A file without a single line feed may end its lines with carriage returns alone. */
  loneReturns: boolean;
}

const lineFeed = 0x0a;
const carriageReturn = 0x0d;
/** Bytes in which zero bytes are counted. */
const zeroesCounted = 4096;

const marks: readonly { encoding: Encoding; bytes: readonly number[] }[] = [
  { encoding: 'utf-8', bytes: [0xef, 0xbb, 0xbf] },
  { encoding: 'utf-16le', bytes: [0xff, 0xfe] },
  { encoding: 'utf-16be', bytes: [0xfe, 0xff] },
];

/**
 * Tells from the first bytes of a file how its text is written: by its byte order mark, by where its zero
 * bytes stand, and by whether what is not ASCII makes UTF-8.
 *
 * @param head the beginning of the file, some hundred bytes or more
 * @param wished an encoding that the plan says it has
 * @throws IntakeFailure for an empty file and for bytes that are no text in any of the encodings
 */
export function recogniseText(head: Buffer, wished?: Encoding): TextForm {
  if (head.length === 0) {
    throw new IntakeFailure('empty-file', 'The file is empty.', 'Export it again and upload it.');
  }
  const mark = marks.find(({ bytes }) => bytes.every((byte, index) => head[index] === byte));
  const told = wished ?? mark?.encoding ?? wideEncoding(head);
  const encoding = told ?? narrowEncoding(head);
  const isMarked = mark?.encoding === encoding;
  return {
    encoding,
    isOpen: told === null && isAscii(head),
    markBytes: isMarked ? mark.bytes.length : 0,
    loneReturns: !head.includes(lineFeed) && head.includes(carriageReturn),
  };
}

/** UTF-16 without a mark: nearly every other byte of common text is zero, all on the same side. */
function wideEncoding(head: Buffer): Encoding | null {
  const seen = head.subarray(0, zeroesCounted);
  const zeroes = { even: 0, odd: 0 };
  seen.forEach((byte, at) => {
    if (byte === 0) zeroes[at % 2 === 0 ? 'even' : 'odd'] += 1;
  });
  const pairs = seen.length / 2;
  const all = zeroes.even + zeroes.odd;
  if (zeroes.odd > 0.3 * pairs && zeroes.even < 0.1 * all) return 'utf-16le';
  if (zeroes.even > 0.3 * pairs && zeroes.odd < 0.1 * all) return 'utf-16be';
  if (all * 4 <= seen.length) return null;
  throw new IntakeFailure(
    'unsupported-encoding',
    'The file holds zero bytes as binary files do.',
    'Save it as CSV in UTF-8 and upload that.',
  );
}

/**
 * UTF-8, unless what is not ASCII makes no UTF-8 anywhere and reads as letters in Windows-1252. A few
 * unreadable bytes do not make a file another encoding.
 */
export function narrowEncoding(head: Buffer): Encoding {
  if (isUtf8(head.subarray(0, lastWholeCharacter(head)))) return 'utf-8';
  const { sequences, strays, letters } = countBeyondAscii(head);
  return sequences === 0 && strays > 0 && letters >= 0.9 * strays ? 'windows-1252' : 'utf-8';
}

/** The head may end within a character. */
function lastWholeCharacter(head: Buffer): number {
  for (let back = 1; back <= 4 && back <= head.length; back++) {
    const byte = head[head.length - back] as number;
    if (byte < 0x80) return head.length;
    if (byte >= 0xc0) return head.length - back;
  }
  return head.length;
}

/** Characters of UTF-8 beyond ASCII, bytes that belong to none, and how many of these stand beside letters. */
function countBeyondAscii(head: Buffer) {
  const counts = { sequences: 0, strays: 0, letters: 0 };
  for (let at = 0; at < head.length; at++) {
    const byte = head[at] as number;
    if (byte < 0x80) continue;
    const length = sequenceLength(head, at);
    if (length > 0) {
      counts.sequences += 1;
      at += length - 1;
      continue;
    }
    counts.strays += 1;
    if (readsIn1252(head, at)) counts.letters += 1;
  }
  return counts;
}

function sequenceLength(bytes: Buffer, at: number): number {
  const byte = bytes[at] as number;
  const length = byte >= 0xf0 ? 4 : byte >= 0xe0 ? 3 : byte >= 0xc2 ? 2 : 0;
  return length > 0 && isUtf8(bytes.subarray(at, at + length)) ? length : 0;
}

/** Signs of Windows-1252 that stand in common text: € ‚ „ … quotation marks, dashes, degrees, and letters. */
const signs1252: ReadonlySet<number> = new Set([
  0x80, 0x82, 0x84, 0x85, 0x8a, 0x8c, 0x8e, 0x91, 0x92, 0x93, 0x94, 0x96, 0x97, 0x9a, 0x9c, 0x9e,
  0x9f, 0xa0, 0xa7, 0xb0, 0xb2, 0xb3, 0xb5,
]);

/** Whether a byte beyond ASCII makes sense in Windows-1252: a sign, or a letter beside letters. */
function readsIn1252(bytes: Buffer, at: number): boolean {
  const byte = bytes[at] as number;
  if (byte < 0xc0) return signs1252.has(byte);
  if (byte >= 0xfe || byte === 0xd7 || byte === 0xf7) return false;
  const next = isLetter(bytes[at + 1]) || (bytes[at + 1] ?? 0) >= 0xc0;
  const isCapital = byte < 0xdf;
  return next || (!isCapital && (isLetter(bytes[at - 1]) || (bytes[at - 1] ?? 0) >= 0xc0));
}

const isLetter = (byte = 0): boolean => /[A-Za-z]/.test(String.fromCharCode(byte));
