import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import { detect } from './detect/detect.ts';
import { openFile } from './open-file.ts';
import type { Opener } from './opened-file.ts';
import { cellsOf } from './sample.ts';

/** A row of an original as it came, with its header. */
export interface RowOfFile {
  header: string[];
  cells: string[];
}

/**
 * Finds the row of a file that begins on a line.
 *
 * @param open begins to read the original
 * @param plan the plan by which the file was read, or null
 * @param line physical line from 1; of a workbook the row of its sheet, of an event log the event’s number
 * @returns null where no row begins there
 */
export async function findRowOfFile(
  open: Opener,
  plan: ColumnPlan | null,
  line: number,
): Promise<RowOfFile | null> {
  const file = await openFile(open, plan ?? {});
  const { header, delimiter } = detect({ file, plan, timeZone: 'UTC' });
  const found: { cells: string[] | null } = { cells: null };
  let isPassed = false;
  const rows = file.rows({ header, delimiter }, (row) => {
    if (row.line === line) found.cells = cellsOf(row);
    isPassed = row.line >= line;
    return !isPassed;
  });
  for await (const _ of rows) if (isPassed) break;
  return found.cells && { header, cells: found.cells };
}
