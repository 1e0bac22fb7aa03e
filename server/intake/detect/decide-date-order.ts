import type { DateOrder } from '../../../shared/contracts/plan.ts';
import { lossyText } from '../cell.ts';
import { IntakeFailure } from '../failure.ts';
import type { OpenedFile } from '../opened-file.ts';
import type { Reading } from '../reading.ts';
import { timePlaces } from '../shapes/places.ts';
import type { ScannedRow } from '../text/row-scanner.ts';
import { DateOrderEvidence } from './date-order.ts';

/** Bytes of a cell that can matter: a date stands at its beginning. */
const dateBytes = 40;

/**
 * Reads on in a file, to its end if need be, until a date tells day and month apart.
 *
 * @throws IntakeFailure where none does
 */
export async function decideDateOrder(reading: Reading, file: OpenedFile): Promise<DateOrder> {
  const evidence = new DateOrderEvidence();
  const columns = timePlaces(reading.places);
  const addRow = (row: ScannedRow): boolean => {
    for (const column of columns) {
      if (column >= row.count || row.trouble !== null || row.line <= reading.headerLine) continue;
      const start = row.starts[column] as number;
      const end = Math.min(row.ends[column] as number, start + dateBytes);
      evidence.add(lossyText(row.bytes, start, end));
    }
    return !evidence.isDecided;
  };
  for await (const _ of file.rows(reading, addRow)) if (evidence.isDecided) break;
  const { order } = evidence;
  if (order === 'day-first' || order === 'month-first') return order;
  throw new IntakeFailure(
    'date-order-unknown',
    'Every date in the file can be read both day first and month first.',
    'Say in the column plan which it is.',
  );
}
