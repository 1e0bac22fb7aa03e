import { and, eq, inArray, sql } from 'drizzle-orm';
import { foldAreaSpelling } from '../../shared/area-spelling.ts';
import type { Transaction } from '../db/client.ts';
import { area, areaSpelling, zone, zoneArea, zoneFact } from '../db/schema/zones.ts';
import { conflict, invalidInput } from '../errors.ts';

/** A site of the running tenant, to write to. */
export interface SiteWriter {
  tx: Transaction;
  organisationId: number;
  siteId: number;
}

/** The beginning of all data: what holds without a date holds from here on. */
const beginning = new Date(Date.UTC(1950, 0, 1));

/** Makes an area at the end of the flow. @throws ApiError conflict where the name is one already */
export async function createArea(
  { tx, organisationId, siteId }: SiteWriter,
  given: { name: string; countsFrom?: 'arrival' | 'start' | undefined },
): Promise<number> {
  const folded = foldAreaSpelling(given.name);
  const [known] = await tx
    .select({ asWritten: areaSpelling.asWritten })
    .from(areaSpelling)
    .where(
      and(
        eq(areaSpelling.organisationId, organisationId),
        eq(areaSpelling.siteId, siteId),
        eq(areaSpelling.folded, folded),
      ),
    );
  if (known) throw conflict(`There is an area written “${known.asWritten}” already.`);
  const [made] = await tx
    .insert(zone)
    .values({
      organisationId,
      siteId,
      kind: 'area',
      name: given.name,
      countsFrom: given.countsFrom ?? 'arrival',
    })
    .returning({ id: zone.id });
  if (!made) throw new Error('The area could not be kept.');
  await tx.insert(area).values({
    organisationId,
    siteId,
    id: made.id,
    origin: 'declared',
    position: sql`1 + coalesce((
      select max(position) from area
      where organisation_id = ${organisationId} and site_id = ${siteId}
    ), 0)`,
  });
  await tx.insert(areaSpelling).values({
    organisationId,
    siteId,
    folded,
    asWritten: given.name,
    areaId: made.id,
    origin: 'declared',
  });
  return made.id;
}

/** Makes a loop of areas; its stays are derived in the background. */
export async function createLoop(
  writer: SiteWriter,
  given: { name: string; areaIds: number[]; countsFrom?: 'arrival' | 'start' | undefined },
): Promise<number> {
  const { tx, organisationId, siteId } = writer;
  await refuseTakenName(writer, 'loop', given.name, null);
  const [made] = await tx
    .insert(zone)
    .values({
      organisationId,
      siteId,
      kind: 'loop',
      name: given.name,
      countsFrom: given.countsFrom ?? 'arrival',
      state: 'deriving',
    })
    .returning({ id: zone.id });
  if (!made) throw new Error('The loop could not be kept.');
  await setLoopAreas(writer, made.id, given.areaIds);
  return made.id;
}

/** Sets which areas a loop spans. @throws ApiError invalid-input for ids that are no areas of the site */
export async function setLoopAreas(
  { tx, organisationId, siteId }: SiteWriter,
  zoneId: number,
  areaIds: readonly number[],
): Promise<void> {
  const wanted = [...new Set(areaIds)];
  const found = await tx
    .select({ id: area.id })
    .from(area)
    .where(
      and(
        eq(area.organisationId, organisationId),
        eq(area.siteId, siteId),
        inArray(area.id, wanted),
      ),
    );
  const unknown = wanted.filter((id) => !found.some((each) => each.id === id));
  if (unknown.length > 0)
    throw invalidInput('A loop is made of areas of its site.', [
      { field: 'areaIds', message: `Not an area of this site: ${unknown.join(', ')}.` },
    ]);
  await tx
    .delete(zoneArea)
    .where(
      and(
        eq(zoneArea.organisationId, organisationId),
        eq(zoneArea.siteId, siteId),
        eq(zoneArea.zoneId, zoneId),
      ),
    );
  await tx
    .insert(zoneArea)
    .values(wanted.map((areaId) => ({ organisationId, siteId, zoneId, areaId })));
}

/** @throws ApiError conflict where another zone of the kind has the name */
export async function refuseTakenName(
  { tx, organisationId, siteId }: SiteWriter,
  kind: 'area' | 'loop' | 'site',
  name: string,
  except: number | null,
): Promise<void> {
  const taken = await tx
    .select({ id: zone.id })
    .from(zone)
    .where(
      and(
        eq(zone.organisationId, organisationId),
        eq(zone.siteId, siteId),
        eq(zone.kind, kind),
        sql`lower(${zone.name}) = lower(${name})`,
      ),
    );
  if (taken.some((each) => each.id !== except))
    throw conflict(`There is a ${kind} named “${name}” already. Choose another name.`);
}

/** Declares the number of servers of a zone from a moment on; null takes every declaration back. */
export async function declareServers(
  { tx, organisationId, siteId }: SiteWriter,
  zoneId: number,
  servers: number | null,
  from: Date | null,
): Promise<void> {
  const ofZone = and(
    eq(zoneFact.organisationId, organisationId),
    eq(zoneFact.siteId, siteId),
    eq(zoneFact.zoneId, zoneId),
    eq(zoneFact.kind, 'servers'),
  );
  // Without a date it holds from the beginning, and no earlier declaration with a date outlives it.
  if (from === null) await tx.delete(zoneFact).where(ofZone);
  if (servers === null) return;
  const amount = String(servers);
  await tx
    .insert(zoneFact)
    .values({
      organisationId,
      siteId,
      zoneId,
      kind: 'servers',
      validFrom: from ?? beginning,
      amount,
    })
    .onConflictDoUpdate({
      target: [
        zoneFact.organisationId,
        zoneFact.siteId,
        zoneFact.zoneId,
        zoneFact.kind,
        zoneFact.validFrom,
      ],
      set: { amount },
    });
}
