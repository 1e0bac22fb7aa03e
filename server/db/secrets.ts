import { eq } from 'drizzle-orm';
import type { Database } from './client.ts';
import { serverSecret } from './schema/people.ts';

/** A secret that all server processes share: the first to ask makes it, everyone reads the same. */
export async function readSecret(
  migrating: Database,
  name: string,
  make: () => string,
): Promise<string> {
  await migrating.insert(serverSecret).values({ name, value: make() }).onConflictDoNothing();
  const [row] = await migrating
    .select({ value: serverSecret.value })
    .from(serverSecret)
    .where(eq(serverSecret.name, name));
  if (!row) throw new Error(`The secret ${name} could not be kept in the database.`);
  return row.value;
}
