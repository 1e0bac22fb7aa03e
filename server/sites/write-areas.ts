import { and, eq, sql } from 'drizzle-orm';
import { foldAreaSpelling } from '../../shared/area-spelling.ts';
import { area, areaSpelling, zone } from '../db/schema/zones.ts';
import { conflict } from '../errors.ts';
import { lockNames, ofSite, type SiteWriter } from './site-writer.ts';

/** Makes an area at the end of the flow. @throws ApiError conflict where the name is one already */
export async function createArea(
  writer: SiteWriter,
  given: { name: string; countsFrom?: 'arrival' | 'start' | undefined },
): Promise<number> {
  await lockNames(writer);
  const id = await insertArea(writer, { ...given, origin: 'declared' });
  await declareSpelling(writer, id, given.name);
  return id;
}

/** The zone of an area and its place at the end of the flow; its spelling is for the caller to give. */
export async function insertArea(
  { tx, organisationId, siteId }: SiteWriter,
  given: {
    name: string;
    origin: 'declared' | 'found';
    countsFrom?: 'arrival' | 'start' | undefined;
  },
): Promise<number> {
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
    origin: given.origin,
    position: sql`1 + coalesce((
      select max(position) from area
      where organisation_id = ${organisationId} and site_id = ${siteId}
    ), 0)`,
  });
  return made.id;
}

/**
 * Renames an area. Its earlier spellings stay its own, so that the next export finds it as before.
 *
 * @throws ApiError conflict where another area is written so
 */
export async function renameArea(writer: SiteWriter, areaId: number, name: string): Promise<void> {
  await lockNames(writer);
  await declareSpelling(writer, areaId, name);
  await writer.tx
    .update(zone)
    .set({ name })
    .where(and(ofSite(writer, zone), eq(zone.id, areaId)));
}

/** Puts an area in its place in the flow. */
export async function placeArea(
  writer: SiteWriter,
  areaId: number,
  position: number,
): Promise<void> {
  await writer.tx
    .update(area)
    .set({ position })
    .where(and(ofSite(writer, area), eq(area.id, areaId)));
}

async function declareSpelling(
  writer: SiteWriter,
  areaId: number,
  asWritten: string,
): Promise<void> {
  const { tx, organisationId, siteId } = writer;
  const folded = foldAreaSpelling(asWritten);
  const added = await tx
    .insert(areaSpelling)
    .values({ organisationId, siteId, folded, asWritten, areaId, origin: 'declared' })
    .onConflictDoNothing()
    .returning({ areaId: areaSpelling.areaId });
  if (added.length > 0) return;
  const [known] = await tx
    .select({ areaId: areaSpelling.areaId, asWritten: areaSpelling.asWritten })
    .from(areaSpelling)
    .where(and(ofSite(writer, areaSpelling), eq(areaSpelling.folded, folded)));
  if (known?.areaId !== areaId)
    throw conflict(
      `There is an area written “${known?.asWritten ?? asWritten}” already. Choose another name.`,
    );
}
