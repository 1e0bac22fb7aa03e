import { createHash } from 'node:crypto';
import { and, asc, eq, isNull, sql } from 'drizzle-orm';
import { columnPlanSchema, type ColumnPlan } from '../../shared/contracts/plan.ts';
import type { Database, Transaction } from '../db/client.ts';
import { person } from '../db/schema/people.ts';
import { columnPlan } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';
import { conflict, notFound } from '../errors.ts';
import { foldHeaderCell } from './shapes/places.ts';
import type { SiteKey } from './site-uploads.ts';

/** A saved reading of one kind of export, in use. */
export interface SavedPlan {
  id: number;
  name: string;
  plan: ColumnPlan;
  /** By which the next file of its kind is recognised. */
  headerFingerprint: string;
  savedBy: string | null;
  savedAt: Date;
}

/** What tells one kind of export: its header, without regard to case and blanks. */
export function fingerprintOf(header: readonly string[]): string {
  const folded = header.map(foldHeaderCell);
  return createHash('sha256').update(JSON.stringify(folded)).digest('hex');
}

/** The saved plans of a site that are in use, by name. */
export function listSavedPlans(db: Database, site: SiteKey): Promise<SavedPlan[]> {
  return withTenant(db, site.organisationId, (tx) => selectPlans(tx, site));
}

async function selectPlans(tx: Transaction, site: SiteKey, id?: number): Promise<SavedPlan[]> {
  const rows = await tx
    .select({
      id: columnPlan.id,
      name: columnPlan.name,
      plan: columnPlan.plan,
      headerFingerprint: columnPlan.headerFingerprint,
      savedBy: person.name,
      savedAt: columnPlan.savedAt,
    })
    .from(columnPlan)
    .leftJoin(person, eq(person.id, columnPlan.savedBy))
    .where(and(inUse(site), id === undefined ? undefined : eq(columnPlan.id, id)))
    .orderBy(asc(columnPlan.name));
  return rows.map((row) => ({ ...row, plan: columnPlanSchema.parse(row.plan) }));
}

const inUse = ({ organisationId, siteId }: SiteKey) =>
  and(
    eq(columnPlan.organisationId, organisationId),
    eq(columnPlan.siteId, siteId),
    isNull(columnPlan.retiredOn),
  );

/** @throws ApiError not-found where the site has no such plan in use */
export async function findSavedPlan(
  tx: Transaction,
  site: SiteKey,
  id: number,
): Promise<SavedPlan> {
  const [found] = await selectPlans(tx, site, id);
  if (!found) throw notFound('The column plan');
  return found;
}

/** What of a saved plan a person gives. */
export interface PlanChange {
  name?: string | undefined;
  plan?: ColumnPlan | undefined;
  header?: readonly string[] | undefined;
  savedBy: number | null;
  savedAt: Date;
}

/** Saves a plan under a name. @throws ApiError conflict where a plan of that name is in use */
export async function savePlan(
  tx: Transaction,
  site: SiteKey,
  given: PlanChange & { name: string; plan: ColumnPlan; header: readonly string[] },
): Promise<SavedPlan> {
  const { header, ...values } = given;
  const [row] = await tx
    .insert(columnPlan)
    .values({ ...site, ...values, headerFingerprint: fingerprintOf(header) })
    .onConflictDoNothing()
    .returning({ id: columnPlan.id });
  if (!row) throw nameIsTaken(given.name);
  return findSavedPlan(tx, site, row.id);
}

/** Renames a plan or changes how it reads. @throws ApiError not-found, or conflict as for saving */
export async function changePlan(
  tx: Transaction,
  site: SiteKey,
  id: number,
  { header, name, plan, savedBy, savedAt }: PlanChange,
): Promise<{ before: SavedPlan; after: SavedPlan }> {
  const before = await findSavedPlan(tx, site, id);
  if (name !== undefined) await refuseTakenName(tx, site, id, name);
  await tx
    .update(columnPlan)
    .set({
      ...(name === undefined ? {} : { name }),
      ...(plan === undefined ? {} : { plan }),
      ...(header === undefined ? {} : { headerFingerprint: fingerprintOf(header) }),
      savedBy,
      savedAt,
    })
    .where(and(inUse(site), eq(columnPlan.id, id)));
  return { before, after: await findSavedPlan(tx, site, id) };
}

async function refuseTakenName(
  tx: Transaction,
  site: SiteKey,
  id: number,
  name: string,
): Promise<void> {
  const [other] = await tx
    .select({ id: columnPlan.id })
    .from(columnPlan)
    .where(
      and(
        inUse(site),
        sql`lower(${columnPlan.name}) = lower(${name})`,
        sql`${columnPlan.id} <> ${id}`,
      ),
    );
  if (other) throw nameIsTaken(name);
}

/** Takes a plan out of use. @throws ApiError not-found where the site has no such plan in use */
export async function retirePlan(
  tx: Transaction,
  site: SiteKey,
  id: number,
  on: Date,
): Promise<SavedPlan> {
  const before = await findSavedPlan(tx, site, id);
  await tx
    .update(columnPlan)
    .set({ retiredOn: on.toISOString().slice(0, 10) })
    .where(and(inUse(site), eq(columnPlan.id, id)));
  return before;
}

const nameIsTaken = (name: string) =>
  conflict(
    `There is a column plan named “${name}” already. Choose another name, or change that one.`,
  );
