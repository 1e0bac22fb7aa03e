import { sql } from 'drizzle-orm';
import type { Database, Transaction } from './client.ts';

/**
 * Runs `work` in one transaction that sees and writes the rows of one organisation only: its id is set
 * for the length of the transaction, and row-level security reads it.
 */
export function withTenant<Result>(
  db: Database,
  organisationId: number,
  work: (tx: Transaction) => Promise<Result>,
): Promise<Result> {
  return db.transaction(async (tx) => {
    await tx.execute(
      sql`/* tenant */ select set_config('weirmark.organisation_id', ${String(organisationId)}, true)`,
    );
    return work(tx);
  });
}
