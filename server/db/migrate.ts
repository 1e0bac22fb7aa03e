import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { sql } from 'drizzle-orm';
import { drizzle } from 'drizzle-orm/node-postgres';
import { migrate } from 'drizzle-orm/node-postgres/migrator';
import { Client } from 'pg';
import PgBoss from 'pg-boss';
import { queues } from '../jobs/queues.ts';
import { applicationUrl, checkApplicationUrl } from './application-role.ts';
import type { Database } from './client.ts';

const migrationsFolder = fileURLToPath(new URL('../../drizzle', import.meta.url));

/** The lock under which a database is brought up to date; any number would do, all must use the same. */
const migrationLock = 7_261_905;

/**
 * Brings a database up to date: tables, queue, the application's role. Several servers may call it at
 * once; they take turns, and the later ones find nothing to do.
 *
 * @param migratingUrl address of the role that owns the schema
 * @param givenApplicationUrl where the application's role was made by hand
 * @returns the address under which requests and jobs run
 */
export async function migrateDatabase(
  migratingUrl: string,
  givenApplicationUrl?: string,
): Promise<{ applicationUrl: string }> {
  const client = new Client({ connectionString: migratingUrl });
  await connectOrTell(client);
  try {
    const db = drizzle(client, { casing: 'snake_case' }) as unknown as Database;
    await db.execute(sql`/* migration lock */ select pg_advisory_lock(${migrationLock})`);
    await migrate(db, { migrationsFolder: path.resolve(migrationsFolder) });
    await migrateQueue(db, migratingUrl);
    if (givenApplicationUrl === undefined)
      return { applicationUrl: await applicationUrl(db, migratingUrl) };
    await checkApplicationUrl(givenApplicationUrl);
    return { applicationUrl: givenApplicationUrl };
  } finally {
    await client.end();
  }
}

/** @throws Error with one sentence that says which database cannot be reached, and why */
async function connectOrTell(client: Client): Promise<void> {
  try {
    await client.connect();
  } catch (cause) {
    // An address with several hosts behind it fails with an error for each, and no message of its own.
    const [reason] = cause instanceof AggregateError ? (cause.errors as unknown[]) : [cause];
    throw new Error(
      `The database at ${client.host}:${client.port} cannot be used (${reason instanceof Error ? reason.message : String(reason)}). Check DATABASE_URL.`,
      { cause },
    );
  }
}

/** The queue's schema and its queues, and the application's right to use them. */
async function migrateQueue(db: Database, migratingUrl: string): Promise<void> {
  const boss = new PgBoss({
    connectionString: migratingUrl,
    supervise: false,
    schedule: false,
    max: 1,
  });
  await boss.start();
  try {
    for (const queue of queues) await boss.createQueue(queue);
  } finally {
    await boss.stop({ graceful: false, wait: true });
  }
  await db.execute(sql`/* grants on the queue */ grant usage on schema pgboss to weirmark_app`);
  await db.execute(sql`/* grants on the queue */ grant select, insert, update, delete on
    pgboss.job, pgboss.archive, pgboss.queue, pgboss.schedule, pgboss.subscription, pgboss.version
    to weirmark_app`);
}
