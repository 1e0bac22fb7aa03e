import { and, eq, inArray } from 'drizzle-orm';
import type { Role } from '../../shared/permissions.ts';
import { hashPassword } from '../auth/passwords.ts';
import type { Database, Transaction } from '../db/client.ts';
import { membership, organisation, person } from '../db/schema/people.ts';

/** Of every account of the demo; it is shown on the demo's sign-in page. */
export const demoPassword = 'lowmoor-demo';

export const lowmoor = 'Lowmoor Instrument Works';
export const fellgate = 'Fellgate Finishing';

const people = [
  { email: 'admin@lowmoor.example', name: 'Orla Brandt', roles: { [lowmoor]: 'admin' } },
  { email: 'analyst@lowmoor.example', name: 'Ivo Quill', roles: { [lowmoor]: 'analyst' } },
  { email: 'supervisor@lowmoor.example', name: 'Ruth Tansley', roles: { [lowmoor]: 'supervisor' } },
  {
    email: 'consultant@lowmoor.example',
    name: 'Mara Devlin',
    roles: { [lowmoor]: 'consultant', [fellgate]: 'consultant' },
  },
  { email: 'analyst@fellgate.example', name: 'Piet Sander', roles: { [fellgate]: 'analyst' } },
] as const satisfies readonly { email: string; name: string; roles: Record<string, Role> }[];

const guestYears = 2;

/** Makes the demo's two organisations and their people. @returns the organisations' ids by name */
export async function makeDemoAccounts(
  tx: Transaction,
  createdAt: Date,
): Promise<Map<string, number>> {
  const passwordHash = await hashPassword(demoPassword);
  const guestUntil = new Date(createdAt);
  guestUntil.setUTCFullYear(guestUntil.getUTCFullYear() + guestYears);
  const firms = await tx
    .insert(organisation)
    .values([
      { name: lowmoor, createdAt },
      { name: fellgate, createdAt },
    ])
    .returning();
  const ids = new Map(firms.map((firm) => [firm.name, firm.id]));
  const known = await tx
    .insert(person)
    .values(
      people.map(({ email, name }) => ({
        email,
        name,
        passwordHash,
        passwordChangedAt: createdAt,
        createdAt,
      })),
    )
    .returning();
  for (const { email, roles } of people)
    for (const [firm, role] of Object.entries<Role>(roles))
      await tx.insert(membership).values({
        organisationId: ids.get(firm) ?? 0,
        personId: known.find((each) => each.email === email)?.id ?? 0,
        role,
        endsAt: role === 'consultant' ? guestUntil : null,
        createdAt,
      });
  return ids;
}

/** The accounts that the sign-in page of the demo offers: one per role, with where it belongs. */
export async function demoAccounts(
  db: Database,
): Promise<{ email: string; role: Role; organisation: string }[]> {
  const rows = await db
    .select({ email: person.email, role: membership.role, organisation: organisation.name })
    .from(person)
    .innerJoin(membership, eq(membership.personId, person.id))
    .innerJoin(organisation, eq(organisation.id, membership.organisationId))
    .where(
      and(
        inArray(
          person.email,
          people.map((each) => each.email),
        ),
        inArray(organisation.name, [lowmoor, fellgate]),
      ),
    );
  return people.flatMap(({ email, roles }) => {
    const [home] = Object.keys(roles);
    return rows.filter((row) => row.email === email && row.organisation === home);
  });
}
