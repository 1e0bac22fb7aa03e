import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { roleMay, type Action } from '../../shared/permissions.ts';
import type { Transaction } from '../db/client.ts';
import { notAllowed } from '../errors.ts';
import type { Actor } from './actor.ts';

/** Who asks at which site, when. */
export interface AreaAsker {
  organisationId: number;
  siteId: number;
  actor: Actor;
  now: Date;
}

/**
 * Whether the person may do it to these areas: a supervisor where all of them are theirs now, others by their
 * role alone. The areas of a zone are its `areaIds`, so a loop is a supervisor's own where every area is.
 */
export async function mayDoInAreas(
  tx: Transaction,
  asker: AreaAsker,
  action: Action,
  areaIds: readonly number[],
): Promise<boolean> {
  const { actor } = asker;
  if (actor.kind !== 'person' || actor.role === null) return false;
  if (roleMay(actor.role, action, false)) return true;
  if (!roleMay(actor.role, action, true) || areaIds.length === 0) return false;
  const own = await readOwnAreas(tx, asker, actor.personId);
  return areaIds.every((id) => own.has(id));
}

/** @throws ApiError not-allowed where a supervisor asks for what is not all in their own areas */
export async function authoriseInAreas(
  tx: Transaction,
  asker: AreaAsker,
  action: Action,
  areaIds: readonly number[],
): Promise<void> {
  if (!(await mayDoInAreas(tx, asker, action, areaIds))) throw notAllowed();
}

const ownRow = z.object({ zone_id: z.number() });

/** The areas that a person owns at a moment. */
export async function readOwnAreas(
  tx: Transaction,
  { organisationId, siteId, now }: Omit<AreaAsker, 'actor'>,
  personId: number,
): Promise<Set<number>> {
  const { rows } = await tx.execute(sql`/* own areas */
    with owner as (
      select distinct on (zone_id) zone_id, person_id from zone_fact
      where organisation_id = ${organisationId} and site_id = ${siteId} and kind = 'owner'
        and valid_from <= ${now.toISOString()}::timestamptz
      order by zone_id, valid_from desc
    )
    select zone_id from owner where person_id = ${personId}`);
  return new Set(
    z
      .array(ownRow)
      .parse(rows)
      .map((row) => row.zone_id),
  );
}
