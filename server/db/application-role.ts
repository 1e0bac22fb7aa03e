import { randomBytes } from 'node:crypto';
import { sql } from 'drizzle-orm';
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
    await migrating.execute(sql`/* application role */ select weirmark_login(${login}, ${password})`);
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
