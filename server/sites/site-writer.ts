import { and, eq, sql, type AnyColumn } from 'drizzle-orm';
import type { Transaction } from '../db/client.ts';

/** A site of the running tenant, to write to. */
export interface SiteWriter {
  tx: Transaction;
  organisationId: number;
  siteId: number;
}

/** The rows of a site in a tenant table. */
export const ofSite = (
  { organisationId, siteId }: SiteWriter,
  table: { organisationId: AnyColumn; siteId: AnyColumn },
) => and(eq(table.organisationId, organisationId), eq(table.siteId, siteId));

/** First half of the lock on a site's names, apart from other uses of advisory locks. */
const namesLock = 7_261_907;

/** Makes who gives names at a site take turns until the transaction ends, so that none is given twice. */
export async function lockNames({ tx, siteId }: SiteWriter): Promise<void> {
  await tx.execute(
    sql`/* names of a site */ select pg_advisory_xact_lock(${namesLock}, ${siteId})`,
  );
}
