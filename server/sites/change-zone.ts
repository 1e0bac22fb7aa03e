import { and, eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { changeZone, Zone } from '../../shared/contracts/zones.ts';
import { zone } from '../db/schema/zones.ts';
import { invalidInput } from '../errors.ts';
import { declareServers } from './declare-servers.ts';
import { ofSite, type SiteWriter } from './site-writer.ts';
import { placeArea, renameArea } from './write-areas.ts';
import { renameLoop, setLoopAreas } from './write-loops.ts';

export type ZoneChanges = z.output<typeof changeZone.body>;

/**
 * Changes a zone as asked; where its stays depend on the change, it is `deriving` from then on.
 *
 * @throws ApiError invalid-input for what does not go with such a zone, conflict for a name that is taken
 */
export async function applyZoneChanges(
  writer: SiteWriter,
  before: Zone,
  changes: ZoneChanges,
): Promise<void> {
  refuseMisplaced(before, changes);
  const { name, servers, serversFrom, position, areaIds } = changes;
  if (name !== undefined)
    await (before.kind === 'area' ? renameArea : renameLoop)(writer, before.id, name);
  if (areaIds) await setLoopAreas(writer, before.id, areaIds);
  if (position !== undefined) await placeArea(writer, before.id, position);
  if (servers !== undefined) {
    const from = serversFrom === undefined ? null : new Date(serversFrom);
    await declareServers(writer, before.id, servers, from);
  }
  const countsFrom = changes.countsFrom ?? before.countsFrom;
  if (areaIds === undefined && countsFrom === before.countsFrom) return;
  await writer.tx
    .update(zone)
    .set({ countsFrom, state: 'deriving' })
    .where(and(ofSite(writer, zone), eq(zone.id, before.id)));
}

function refuseMisplaced(before: Zone, changes: ZoneChanges): void {
  const errors = [];
  if (changes.name !== undefined && before.kind === 'site')
    errors.push({ field: 'name', message: 'This zone bears the name of its site: change that.' });
  if (changes.areaIds && before.kind !== 'loop')
    errors.push({ field: 'areaIds', message: 'Only a loop is made of chosen areas.' });
  if (changes.position !== undefined && before.kind !== 'area')
    errors.push({ field: 'position', message: 'Only an area has a place in the flow.' });
  if (changes.serversFrom !== undefined && typeof changes.servers !== 'number')
    errors.push({ field: 'serversFrom', message: 'Say how many servers there are from then on.' });
  if (errors.length > 0)
    throw invalidInput('Some of this does not go with such a zone. Nothing was changed.', errors);
}
