import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import { detect } from './detect.ts';
import { RowScanner } from './row-scanner.ts';
import { cellsOf } from './sample.ts';
import { openText } from './text-source.ts';

/** A row of an original as it came, with its header. */
export interface RowOfFile {
  header: string[];
  cells: string[];
}

/**
 * Finds the row of a file that begins on a line.
 *
 * @param plan the plan by which the file was read, or null
 * @param line physical line, from 1
 * @returns null where no row begins there
 */
export async function findRowOfFile(
  original: AsyncIterable<Buffer>,
  plan: ColumnPlan | null,
  line: number,
): Promise<RowOfFile | null> {
  const source = await openText(original);
  const { sample: text, isWhole } = source;
  const { header, delimiter } = detect({ text, isWhole, plan, timeZone: 'UTC' });
  const scanner = new RowScanner(delimiter);
  let cells: string[] | null = null;
  let isPassed = false;
  const look = (block: Buffer, isLast: boolean): void => {
    scanner.scan(block, isLast, (row) => {
      if (row.line === line) cells = cellsOf(row);
      isPassed = row.line >= line;
      return !isPassed;
    });
  };
  for await (const block of source.blocks) {
    look(block.text, false);
    if (isPassed) break;
  }
  if (!isPassed) look(Buffer.alloc(0), true);
  return cells && { header, cells };
}
