import { randomBytes } from 'node:crypto';
import { sql } from 'drizzle-orm';
import { Client } from 'pg';
import type { Database } from './client.ts';
import { readSecret } from './secrets.ts';

/**
 * The role under which requests and jobs run: it owns nothing and cannot bypass row-level security.
 * Made here with a random password that all server processes share.
 *
 * @param migrating connection of the role that owns the schema
 * @param migratingUrl its address; the answer differs from it in user and password
 * @throws where the migrating role may not make roles; the message says how to do it by hand
 */
export async function applicationUrl(migrating: Database, migratingUrl: string): Promise<string> {
  const password = await readSecret(migrating, 'application-password', () =>
    randomBytes(24).toString('base64url'),
  );
  const url = new URL(migratingUrl);
  // Roles belong to the whole cluster: each database has a login of its own.
  const login = await readSecret(
    migrating,
    'application-login',
    () => `weirmark_app_${randomBytes(6).toString('hex')}`,
  );
  try {
    await migrating.execute(
      sql`/* application role */ select weirmark_login(${login}, ${password})`,
    );
  } catch (cause) {
    throw new Error(
      'The database role in DATABASE_URL may not create roles. Create a login role, grant it weirmark_app, and give its address in DATABASE_APP_URL.',
      { cause },
    );
  }
  url.username = login;
  url.password = password;
  return url.href;
}

/**
 * Refuses a role made by hand that row-level security would not bind.
 *
 * @throws Error with a sentence that says what is wrong with the role
 */
export async function checkApplicationUrl(url: string): Promise<void> {
  const client = new Client({ connectionString: url });
  await client.connect();
  try {
    const { rows } = await client.query<{ unbound: boolean; granted: boolean }>(
      `select rolsuper or rolbypassrls as unbound, pg_has_role('weirmark_app', 'usage') as granted
       from pg_roles where rolname = current_user`,
    );
    const [role] = rows;
    if (role?.unbound)
      throw new Error(
        'The role in DATABASE_APP_URL is a superuser or bypasses row-level security. Give one that does neither.',
      );
    if (!role?.granted)
      throw new Error('The role in DATABASE_APP_URL lacks its rights: grant it weirmark_app.');
  } finally {
    await client.end();
  }
}
