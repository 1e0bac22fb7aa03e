import { sql } from 'drizzle-orm';
import { connect, type Database } from '../../server/db/client.ts';
import { withTenant } from '../../server/db/tenant.ts';
import { cloneDatabase } from './database.ts';

/** An empty site in a database of its own, for what lies below the API. */
export interface IntakeSite {
  db: Database;
  key: { organisationId: number; siteId: number };
  accessKeyId: number;
  close(): Promise<void>;
}

export async function makeIntakeSite(timeZone = 'UTC'): Promise<IntakeSite> {
  const database = await cloneDatabase();
  const db = connect(database.applicationUrl);
  const key = await insertSite(db, timeZone);
  const { rows } = await db.execute(sql`/* access key */
    insert into access_key (organisation_id, site_id, name, key_hash, created_at)
    values (${key.organisationId}, ${key.siteId}, 'nightly', 'x', now()) returning id`);
  return {
    db,
    key,
    accessKeyId: Number(rows[0]?.id),
    async close() {
      await db.$client.end();
      await database.drop();
    },
  };
}

async function insertSite(
  db: Database,
  timeZone: string,
): Promise<{ organisationId: number; siteId: number }> {
  const made = await db.execute(sql`/* organisation */
    insert into organisation (name, created_at) values ('Test', now()) returning id`);
  const organisationId = Number(made.rows[0]?.id);
  const listed = await db.execute(sql`/* site */
    insert into site_directory (organisation_id) values (${organisationId}) returning site_id`);
  const siteId = Number(listed.rows[0]?.site_id);
  await withTenant(db, organisationId, (tx) =>
    tx.execute(sql`/* site */
      insert into site (organisation_id, id, name, time_zone, created_at)
      values (${organisationId}, ${siteId}, 'Test', ${timeZone}, now())`),
  );
  return { organisationId, siteId };
}
