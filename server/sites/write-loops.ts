import { and, eq, inArray, sql } from 'drizzle-orm';
import { area, zone, zoneArea } from '../db/schema/zones.ts';
import { conflict, invalidInput } from '../errors.ts';
import { areaCountedAt, mergedAreas } from '../flow/area-moves.ts';
import { readAreaMoves } from '../flow/read-area-moves.ts';
import { lockNames, ofSite, type SiteWriter } from './site-writer.ts';

/** Makes a loop of areas; its stays are derived in the background. */
export async function createLoop(
  writer: SiteWriter,
  given: { name: string; areaIds: number[]; countsFrom?: 'arrival' | 'start' | undefined },
): Promise<number> {
  const { tx, organisationId, siteId } = writer;
  await refuseTakenName(writer, given.name, null);
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

/** @throws ApiError conflict where another loop of the site has the name */
export async function renameLoop(writer: SiteWriter, zoneId: number, name: string): Promise<void> {
  await refuseTakenName(writer, name, zoneId);
  await writer.tx
    .update(zone)
    .set({ name })
    .where(and(ofSite(writer, zone), eq(zone.id, zoneId)));
}

/**
 * Sets which areas a loop spans. An area merged into one of them stays in the loop, so that it is there
 * when the merge is taken back.
 *
 * @throws ApiError invalid-input for ids that are no areas of the site, or are merged into another
 */
export async function setLoopAreas(
  writer: SiteWriter,
  zoneId: number,
  areaIds: readonly number[],
): Promise<void> {
  const { tx, organisationId, siteId } = writer;
  const wanted = [...new Set(areaIds)];
  const moves = await readAreaMoves(writer);
  const merged = mergedAreas(moves);
  const found = await tx
    .select({ id: area.id })
    .from(area)
    .where(and(ofSite(writer, area), inArray(area.id, wanted)));
  const unknown = wanted.filter((id) => !found.some((each) => each.id === id) || merged.has(id));
  if (unknown.length > 0)
    throw invalidInput('A loop is made of areas of its site. Nothing was changed.', [
      {
        field: 'areaIds',
        message: `Not an area of this site, or merged into another: ${unknown.join(', ')}.`,
      },
    ]);
  const before = await tx
    .delete(zoneArea)
    .where(and(ofSite(writer, zoneArea), eq(zoneArea.zoneId, zoneId)))
    .returning({ areaId: zoneArea.areaId });
  const stay = before
    .map(({ areaId }) => areaId)
    .filter((id) => merged.has(id) && wanted.includes(areaCountedAt(moves, id, -Infinity)));
  await tx
    .insert(zoneArea)
    .values([...wanted, ...stay].map((areaId) => ({ organisationId, siteId, zoneId, areaId })));
}

async function refuseTakenName(
  writer: SiteWriter,
  name: string,
  except: number | null,
): Promise<void> {
  await lockNames(writer);
  const taken = await writer.tx
    .select({ id: zone.id })
    .from(zone)
    .where(
      and(ofSite(writer, zone), eq(zone.kind, 'loop'), sql`lower(${zone.name}) = lower(${name})`),
    );
  if (taken.some((each) => each.id !== except))
    throw conflict(`There is a loop named “${name}” already. Choose another name.`);
}
