import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { Database } from '../db/client.ts';

const siteRow = z
  .object({ organisation_id: z.number(), site_id: z.number() })
  .transform((row) => ({ organisationId: row.organisation_id, siteId: row.site_id }));

/** Every site whose uploads, withdrawals or zones wait for work, whatever the organisation. */
export async function findSitesWithWork(
  db: Database,
): Promise<{ organisationId: number; siteId: number }[]> {
  const { rows } = await db.execute(sql`/* sites with work */ select * from sites_with_work()`);
  return z.array(siteRow).parse(rows);
}
