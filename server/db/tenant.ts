import { sql } from 'drizzle-orm';
import type { Database, Transaction } from './client.ts';

/**
 * Runs `work` in one transaction that sees and writes the rows of one organisation only: its id is set
 * for the length of the transaction, and row-level security reads it. Inside a running transaction the id
 * holds until that ends, or is set to another.
 */
export function withTenant<Result>(
  db: Pick<Database, 'transaction'>,
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
