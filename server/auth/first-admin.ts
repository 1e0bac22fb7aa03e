import { createHash, randomBytes, timingSafeEqual } from 'node:crypto';
import { sql } from 'drizzle-orm';
import type { Database } from '../db/client.ts';
import { membership, organisation, person } from '../db/schema/people.ts';
import { readSecret } from '../db/secrets.ts';
import { recordAct } from '../audit/record-act.ts';
import type { Dependencies, FirstAdminGate } from '../dependencies.ts';
import { conflict } from '../errors.ts';
import { withTenant } from '../db/tenant.ts';
import { hashPassword } from './passwords.ts';

const digest = (token: string) => createHash('sha256').update(token).digest();

async function hasOrganisation(db: Pick<Database, 'execute'>): Promise<boolean> {
  const { rows } = await db.execute(
    sql`/* any organisation */ select exists (select from organisation) as found`,
  );
  return rows[0]?.found === true;
}

/**
 * The gate to the first-admin page. Its token is one for all server processes and opens nothing once an
 * organisation exists.
 */
export async function createFirstAdminGate(
  migrating: Database,
  db: Database,
): Promise<{ gate: FirstAdminGate; token: string }> {
  const token = await readSecret(migrating, 'first-admin-token', () =>
    randomBytes(24).toString('base64url'),
  );
  const expected = digest(token);
  const isOpen = async () => !(await hasOrganisation(db));
  const gate = {
    isOpen,
    matches: async (given: string) => timingSafeEqual(digest(given), expected) && (await isOpen()),
  };
  return { gate, token };
}

/** Makes the first organisation and its admin. @throws ApiError conflict where another was first */
export async function makeFirstAdmin(
  deps: Dependencies,
  given: { organisation: string; name: string; email: string; password: string },
  requestId: string,
): Promise<{ id: number; email: string; name: string }> {
  const createdAt = deps.clock.now();
  const passwordHash = await hashPassword(given.password);
  return deps.db.transaction(async (tx) => {
    await tx.execute(sql`/* one first admin */ lock table organisation in exclusive mode`);
    if (await hasOrganisation(tx)) throw conflict('The first admin was made already. Sign in.');
    const [firm] = await tx
      .insert(organisation)
      .values({ name: given.organisation, createdAt })
      .returning();
    const [admin] = await tx
      .insert(person)
      .values({
        email: given.email,
        name: given.name,
        passwordHash,
        passwordChangedAt: createdAt,
        createdAt,
      })
      .returning();
    if (!firm || !admin) throw new Error('The first admin could not be kept.');
    await tx
      .insert(membership)
      .values({ organisationId: firm.id, personId: admin.id, role: 'admin', createdAt });
    await withTenant(tx, firm.id, (tenant) =>
      recordAct(tenant, {
        organisationId: firm.id,
        at: createdAt,
        actor: { kind: 'stranger' },
        action: 'first-admin.create',
        subjectKind: 'person',
        subjectId: admin.id,
        after: { organisation: firm.name, email: admin.email },
        requestId,
      }),
    );
    return admin;
  });
}
