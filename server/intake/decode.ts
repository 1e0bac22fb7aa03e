import { IntakeFailure } from './failure.ts';
import { foreignKind } from './file-kind.ts';

/** How the bytes of a file become text: its encoding, the bytes before the text, and what ends a line. */
export interface TextForm {
  encoding: 'utf-8';
  /** Length of the byte order mark at the beginning of the file. */
  markBytes: number;
  /** A file without a single line feed may end its lines with carriage returns alone. */
  loneReturns: boolean;
}

const lineFeed = 0x0a;
const carriageReturn = 0x0d;

/**
 * Tells from the first bytes of a file how its text is written.
 *
 * @param head the beginning of the file, some hundred bytes or more
 * @throws IntakeFailure for an empty file, a file that is no text, or an encoding that is not read
 */
export function recogniseText(head: Buffer): TextForm {
  if (head.length === 0) {
    throw new IntakeFailure('empty-file', 'The file is empty.', 'Export it again and upload it.');
  }
  refuseForeignKind(head);
  refuseOtherEncodings(head);
  return {
    encoding: 'utf-8',
    markBytes: head[0] === 0xef && head[1] === 0xbb && head[2] === 0xbf ? 3 : 0,
    loneReturns: !head.includes(lineFeed) && head.includes(carriageReturn),
  };
}

function refuseForeignKind(head: Buffer): void {
  const kind = foreignKind(head);
  if (kind === null) return;
  throw new IntakeFailure(
    'wrong-kind',
    `The file is ${kind}, not delimited text.`,
    'Export the log as CSV and upload that.',
  );
}

function refuseOtherEncodings(head: Buffer): void {
  const isWide = (head[0] === 0xff && head[1] === 0xfe) || (head[0] === 0xfe && head[1] === 0xff);
  const zeros = head.subarray(0, 1024).reduce((sum, byte) => sum + (byte === 0 ? 1 : 0), 0);
  if (isWide || zeros * 4 > Math.min(head.length, 1024)) {
    throw new IntakeFailure(
      'unsupported-encoding',
      isWide ? 'The file is written in UTF-16.' : 'The file holds zero bytes as binary files do.',
      'Save it as CSV in UTF-8 and upload that.',
    );
  }
}

/** The text of a block in UTF-8 with line feeds, without the byte order mark of the first block. */
export function decodeBlock(form: TextForm, block: Buffer, isFirst: boolean): Buffer {
  const text = isFirst ? block.subarray(form.markBytes) : block;
  if (form.loneReturns) {
    for (
      let at = text.indexOf(carriageReturn);
      at >= 0;
      at = text.indexOf(carriageReturn, at + 1)
    ) {
      text[at] = lineFeed;
    }
  }
  return text;
}
