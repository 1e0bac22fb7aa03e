import { and, asc, eq, gt } from 'drizzle-orm';
import type { Database } from '../db/client.ts';
import { refusedRow } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';
import type { UploadKey } from './original.ts';

const header = 'line,reason,detail,row\r\n';
/** Rows that are fetched at once. */
const lotRows = 2000;

/** The refused rows of an upload as CSV in UTF-8, lot by lot: line number, reason, sentence, row as it came. */
export async function* refusedCsv(db: Database, key: UploadKey): AsyncGenerator<string> {
  yield header;
  for (let last = 0; ;) {
    const rows = await readLot(db, key, last);
    if (rows.length === 0) return;
    yield rows.map(csvLine).join('');
    last = rows.at(-1)?.id ?? last;
  }
}

function readLot(db: Database, key: UploadKey, last: number) {
  return withTenant(db, key.organisationId, (tx) =>
    tx
      .select()
      .from(refusedRow)
      .where(
        and(
          eq(refusedRow.organisationId, key.organisationId),
          eq(refusedRow.siteId, key.siteId),
          eq(refusedRow.uploadId, key.uploadId),
          gt(refusedRow.id, last),
        ),
      )
      .orderBy(asc(refusedRow.id))
      .limit(lotRows),
  );
}

type RefusedRow = Pick<typeof refusedRow.$inferSelect, 'line' | 'reason' | 'detail' | 'raw'>;

function csvLine({ line, reason, detail, raw }: RefusedRow): string {
  return `${line},${reason},${csvCell(detail)},${csvCell(raw)}\r\n`;
}

/** A quoted cell that no spreadsheet takes for a formula: an apostrophe goes before what could begin one. */
export function csvCell(text: string): string {
  const safe = /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
  return `"${safe.replaceAll('"', '""')}"`;
}
