import { hashPassword } from '../../server/auth/passwords.ts';
import { membership, person } from '../../server/db/schema/people.ts';
import type { Role } from '../../shared/permissions.ts';
import { testNow, type TestApp } from './app.ts';

let made = 0;

/** Adds a person to an organisation, to sign in with `password`. */
export async function addMember(
  test: TestApp,
  organisationId: number,
  role: Role,
  endsAt: Date | null = null,
  password = 'a long enough word',
): Promise<{ id: number; email: string; password: string }> {
  made += 1;
  const email = `member${made}@lowmoor.example`;
  const [added] = await test.db
    .insert(person)
    .values({
      email,
      name: `Member ${made}`,
      passwordHash: await hashPassword(password),
      passwordChangedAt: testNow,
      createdAt: testNow,
    })
    .returning();
  if (!added) throw new Error('The person could not be added.');
  await test.db
    .insert(membership)
    .values({ organisationId, personId: added.id, role, endsAt, createdAt: testNow });
  return { id: added.id, email, password };
}
