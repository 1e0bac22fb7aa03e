import { eq } from 'drizzle-orm';
import type { Database } from '../db/client.ts';
import { person } from '../db/schema/people.ts';
import { passwordMatches } from './passwords.ts';

/** A person as they are greeted. */
export interface KnownPerson {
  id: number;
  email: string;
  name: string;
}

/** The person with this address and password, or null; neither answer nor time tells which was wrong. */
export async function findByPassword(
  db: Database,
  { email, password }: { email: string; password: string },
): Promise<KnownPerson | null> {
  const [found] = await db.select().from(person).where(eq(person.email, email));
  const matches = await passwordMatches(found?.passwordHash ?? null, password);
  return matches && found ? found : null;
}
