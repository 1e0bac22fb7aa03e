import { hashPassword } from '../../server/auth/passwords.ts';
import { membership, person } from '../../server/db/schema/people.ts';
import type { Role } from '../../shared/permissions.ts';
import { testNow, type TestApp } from './app.ts';

let made = 0;

export interface AddedMember {
  id: number;
  email: string;
  password: string;
}

/** Adds a person to an organisation: a new one, to sign in with `password`, or one that was added before. */
export async function addMember(
  test: TestApp,
  organisationId: number,
  role: Role,
  endsAt: Date | null = null,
  known?: AddedMember,
): Promise<AddedMember> {
  const added = known ?? (await addPerson(test));
  await test.db
    .insert(membership)
    .values({ organisationId, personId: added.id, role, endsAt, createdAt: testNow });
  return added;
}

async function addPerson(test: TestApp): Promise<AddedMember> {
  made += 1;
  const email = `member${made}@lowmoor.example`;
  const password = 'a long enough word';
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
  return { id: added.id, email, password };
}
