import { sql } from 'drizzle-orm';
import { connect, type Database } from '../../server/db/client.ts';
import { migrateDatabase } from '../../server/db/migrate.ts';
import { withTenant } from '../../server/db/tenant.ts';

/** An empty site in a database of its own. */
export interface TestSite {
  db: Database;
  key: { organisationId: number; siteId: number };
  accessKeyId: number;
  close(): Promise<void>;
}

export async function makeSite(timeZone = 'UTC'): Promise<TestSite> {
  const base = process.env.INTAKE_TEST_URL ?? '';
  const name = `t_${Date.now()}_${Math.floor(Math.random() * 1e6)}`;
  const admin = connect(`${base}/postgres`);
  await admin.$client.query(`create database ${name}`);
  const { applicationUrl } = await migrateDatabase(`${base}/${name}`);
  const owner = connect(`${base}/${name}`);
  const db = connect(applicationUrl);
  const key = await insertSite(db, timeZone);
  const { rows } = await db.execute(sql`/* key */
    insert into access_key (organisation_id, site_id, name, key_hash, created_at)
    values (${key.organisationId}, ${key.siteId}, 'nightly', 'x', now()) returning id`);
  return {
    db,
    key,
    accessKeyId: Number(rows[0]?.id),
    async close() {
      await db.$client.end();
      await owner.$client.end();
      await admin.$client.query(`drop database ${name} with (force)`);
      await admin.$client.end();
    },
  };
}

async function insertSite(db: Database, timeZone: string) {
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
