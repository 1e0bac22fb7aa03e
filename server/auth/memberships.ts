import { and, asc, eq, gt, isNull, or } from 'drizzle-orm';
import type { Role } from '../../shared/permissions.ts';
import type { Database } from '../db/client.ts';
import { membership, organisation } from '../db/schema/people.ts';

export interface MemberOf {
  id: number;
  name: string;
  role: Role;
  endsAt: string | null;
}

/** The organisations that a person belongs to now; a membership that has ended is none. */
export async function organisationsOf(
  db: Database,
  personId: number,
  now: Date,
): Promise<MemberOf[]> {
  const rows = await db
    .select({
      id: organisation.id,
      name: organisation.name,
      role: membership.role,
      endsAt: membership.endsAt,
    })
    .from(membership)
    .innerJoin(organisation, eq(organisation.id, membership.organisationId))
    .where(
      and(
        eq(membership.personId, personId),
        or(isNull(membership.endsAt), gt(membership.endsAt, now)),
      ),
    )
    .orderBy(asc(organisation.name));
  return rows.map((row) => ({ ...row, endsAt: row.endsAt?.toISOString() ?? null }));
}
