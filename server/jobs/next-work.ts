import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { Database } from '../db/client.ts';
import { withTenant } from '../db/tenant.ts';

/** What is to be done next at a site. */
export type NextWork =
  | { kind: 'load'; uploadId: number }
  | { kind: 'withdraw'; uploadId: number }
  | { kind: 'rebuild' }
  | { kind: 'derive-zone'; zoneId: number };

const workRow = z.object({
  loading: z.number().nullable(),
  withdrawing: z.number().nullable(),
  rebuilding: z.boolean(),
  area_deriving: z.boolean(),
  zone_deriving: z.number().nullable(),
});

/**
 * Withdrawals first, then uploads in order of receipt, then what settings ask for. An upload found half
 * read was broken off with its server: it begins anew.
 */
export async function readNextWork(
  db: Database,
  organisationId: number,
  siteId: number,
): Promise<NextWork | null> {
  const { rows } = await withTenant(db, organisationId, (tx) =>
    tx.execute(sql`/* next work */
      with of_site as (
        select * from upload where organisation_id = ${organisationId} and site_id = ${siteId}
      ),
      deriving as (
        select id, kind from zone
        where organisation_id = ${organisationId} and site_id = ${siteId} and state = 'deriving'
      )
      select
        (select min(id) from of_site where status in ('waiting', 'reading', 'loading')) as loading,
        (
          select min(id) from of_site where withdraw_requested_at is not null and status = 'loaded'
        ) as withdrawing,
        exists (
          select from site
          where organisation_id = ${organisationId} and id = ${siteId}
            and rebuild_requested_at is not null
        ) as rebuilding,
        exists (select from deriving where kind = 'area') as area_deriving,
        (select min(id) from deriving) as zone_deriving`),
  );
  const row = workRow.parse(rows[0]);
  if (row.withdrawing !== null) return { kind: 'withdraw', uploadId: row.withdrawing };
  if (row.loading !== null) return { kind: 'load', uploadId: row.loading };
  // An area's stays are columns of its records: they are made with all records.
  if (row.rebuilding || row.area_deriving) return { kind: 'rebuild' };
  if (row.zone_deriving !== null) return { kind: 'derive-zone', zoneId: row.zone_deriving };
  return null;
}
