import type { ColumnPlan, FileKind } from '../../shared/contracts/plan.ts';
import { kindOfFile } from './file-kind.ts';
import { sampleBytes } from './limits.ts';
import type { OpenedFile, Opener } from './opened-file.ts';
import { openText } from './text/open-text.ts';
import { openWorkbook } from './workbook/open-workbook.ts';
import { openXes } from './xes/open-xes.ts';

/** What a plan says of the file itself; what it leaves out is detected. */
export type FileWishes = Partial<Pick<ColumnPlan, 'encoding' | 'delimiter' | 'sheet'>>;

const openers: Readonly<
  Record<
    FileKind,
    (open: Opener, head: Head, wishes: FileWishes) => OpenedFile | Promise<OpenedFile>
  >
> = {
  text: openText,
  workbook: openWorkbook,
  xes: openXes,
};

/** The beginning of a file, as much as is looked at. */
export interface Head {
  bytes: Buffer;
  /** Whether it is all of the file. */
  isWhole: boolean;
}

/**
 * Looks at the beginning of a file and tells how it can be read.
 *
 * @param isCut whether the bytes are only the beginning of a longer file
 * @throws IntakeFailure where it is empty, of a kind that is not read, or broken
 */
export async function openFile(
  open: Opener,
  wishes: FileWishes,
  isCut = false,
): Promise<OpenedFile> {
  const head = await readHead(open, isCut);
  return openers[kindOfFile(head.bytes)](open, head, wishes);
}

async function readHead(open: Opener, isCut: boolean): Promise<Head> {
  const blocks: Buffer[] = [];
  let length = 0;
  for await (const block of open()) {
    length += blocks.push(block) && block.length;
    if (length >= sampleBytes) return { bytes: Buffer.concat(blocks), isWhole: false };
  }
  return { bytes: Buffer.concat(blocks), isWhole: !isCut };
}
