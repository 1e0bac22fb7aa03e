import { sql } from 'drizzle-orm';
import { connect, type Database } from '../../server/db/client.ts';
import { readDerived, type DerivedState } from '../../server/flow/derived-state.ts';
import { rebuildSite } from '../../server/flow/derive/derive.ts';
import { inDerivation } from '../../server/jobs/derivation-of-site.ts';

const organisationId = 1;

/** Looks at a database past the server, under the role that owns it. */
export async function lookingAt<Result>(
  url: string,
  look: (db: Database) => Promise<Result>,
): Promise<Result> {
  const db = connect(url, { max: 1 });
  try {
    return await look(db);
  } finally {
    await db.$client.end();
  }
}

/** What is derived of a site, and what a rebuild derives. */
export function derivedAndRebuilt(
  db: Database,
  siteId: number,
): Promise<{ derived: DerivedState[]; rebuilt: DerivedState[] }> {
  return inDerivation(db, organisationId, siteId, async (derivation) => {
    const derived = await readDerived(derivation.tx, organisationId, siteId);
    await rebuildSite(derivation);
    return { derived, rebuilt: await readDerived(derivation.tx, organisationId, siteId) };
  });
}

/**
 * What is left of work that was broken off, each as a number that is 0 in a database at rest: rows of uploads
 * that are not loaded, uploads that are under way, stages that take room, and locks.
 */
export async function readLeftOvers(db: Database): Promise<Record<string, number>> {
  const { rows } = await db.execute(sql`/* left-overs */
    with told as (
      select organisation_id, site_id, upload_id from upload_row
      union all
      select organisation_id, site_id, upload_id from refused_row
      union all
      select organisation_id, site_id, upload_id from upload_area
    )
    select
      (
        select count(*)::integer from told left join upload
          on upload.organisation_id = told.organisation_id
          and upload.site_id = told.site_id and upload.id = told.upload_id
        where status is distinct from 'loaded'
      ) as rows_of_others,
      (
        select count(*)::integer from upload
        where status in ('receiving', 'waiting', 'reading', 'loading')
      ) as under_way,
      (
        select count(*)::integer from pg_class
        where relpersistence = 't' and relkind = 'r' and pg_relation_size(oid) > 0
      ) as stages,
      (
        select count(*)::integer from pg_locks
        where locktype = 'advisory' and objsubid = 2
          and database = (select oid from pg_database where datname = current_database())
      ) as locks`);
  return rows[0] as Record<string, number>;
}

/** What is left when nothing is. */
export const nothingLeft = { rows_of_others: 0, under_way: 0, stages: 0, locks: 0 };
