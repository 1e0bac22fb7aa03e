import type { DateOrder } from '../../shared/contracts/plan.ts';
import { lossyText } from './cell.ts';
import { DateOrderEvidence } from './date-order.ts';
import { IntakeFailure } from './failure.ts';
import type { Reading } from './reading.ts';
import { RowScanner, type ScannedRow } from './row-scanner.ts';
import { timePlaces } from './shapes/stay-columns.ts';
import type { TextSource } from './text-source.ts';

/**
 * Reads on in a file, to its end if need be, until a date tells day and month apart.
 *
 * @throws IntakeFailure where none does
 */
export async function decideDateOrder(
  { places, delimiter }: Reading,
  source: TextSource,
): Promise<DateOrder> {
  const evidence = new DateOrderEvidence();
  const columns = timePlaces(places);
  const addRow = (row: ScannedRow): boolean => {
    for (const column of columns) {
      if (column >= row.count || row.trouble !== null) continue;
      const start = row.starts[column] as number;
      evidence.add(lossyText(row.bytes, start, Math.min(row.ends[column] as number, start + 40)));
    }
    return !evidence.isDecided;
  };
  const scanner = new RowScanner(delimiter);
  for await (const { text } of source.blocks) {
    scanner.scan(text, false, addRow);
    if (evidence.isDecided) break;
  }
  if (!evidence.isDecided) scanner.scan(Buffer.alloc(0), true, addRow);
  const { order } = evidence;
  if (order === 'day-first' || order === 'month-first') return order;
  throw new IntakeFailure(
    'date-order-unknown',
    'Every date in the file can be read both day first and month first.',
    'Say in the column plan which it is.',
  );
}
