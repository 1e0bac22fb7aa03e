import { and, inArray } from 'drizzle-orm';
import type { z } from 'zod';
import type { confirmSetUp, SetUp } from '../../shared/contracts/set-up.ts';
import { area } from '../db/schema/zones.ts';
import type { Transaction } from '../db/client.ts';
import { invalidInput } from '../errors.ts';
import { readerOfSite } from '../flow/figure-zones.ts';
import { readAreasOnWay } from '../flow/guess-flow-order.ts';
import { readServerGuesses } from '../flow/guess-servers.ts';
import { guessFlowOrder } from '../methods/flow-order.ts';
import { declareServers } from './declare-servers.ts';
import { readZones } from './read-zones.ts';
import { ofSite, type SiteWriter } from './site-writer.ts';
import { placeArea } from './write-areas.ts';

type Confirmed = z.output<typeof confirmSetUp.body>['areas'];

/** The order of a site's areas and their servers, with what its data let guess. */
export async function readSetUpOf(
  tx: Transaction,
  organisationId: number,
  siteId: number,
): Promise<SetUp> {
  const reader = await readerOfSite(tx, organisationId, siteId);
  const zones = await readZones(tx, organisationId, siteId);
  const areas = zones.filter((zone) => zone.kind === 'area');
  const until = zones.find((zone) => zone.kind === 'site')?.dataUntil ?? null;
  const positions = guessFlowOrder(await readAreasOnWay(reader));
  const servers =
    until === null ? new Map<number, number>() : await readServerGuesses(reader, Date.parse(until));
  return {
    confirmed: !(await anyFound({ tx, organisationId, siteId }, areas)),
    areas: areas.map((zone) => ({
      zoneId: zone.id,
      name: zone.name,
      position: zone.position ?? 1,
      guessedPosition: positions.get(zone.id) ?? areas.length,
      servers: zone.servers,
      guessedServers: servers.get(zone.id) ?? null,
    })),
  };
}

async function anyFound(writer: SiteWriter, zones: readonly { id: number }[]): Promise<boolean> {
  const areas = await writer.tx
    .select({ id: area.id, origin: area.origin })
    .from(area)
    .where(ofSite(writer, area));
  return areas.some(({ id, origin }) => origin === 'found' && zones.some((zone) => zone.id === id));
}

/**
 * Takes the order of areas and their servers as a person says they are: from then on they are declared.
 *
 * @throws ApiError invalid-input where an area is missing, named twice or not of this site
 */
export async function applySetUp(writer: SiteWriter, areas: Confirmed): Promise<void> {
  const { tx, organisationId, siteId } = writer;
  const zones = await readZones(tx, organisationId, siteId);
  const known = new Set(zones.filter((zone) => zone.kind === 'area').map((zone) => zone.id));
  refuseIncomplete(known, areas);
  for (const { zoneId, position, servers } of areas) {
    await placeArea(writer, zoneId, position);
    const before = zones.find((zone) => zone.id === zoneId)?.servers ?? null;
    if (servers !== before) await declareServers(writer, zoneId, servers, null);
  }
  await tx
    .update(area)
    .set({ origin: 'declared' })
    .where(and(ofSite(writer, area), inArray(area.id, [...known])));
}

function refuseIncomplete(known: ReadonlySet<number>, areas: Confirmed): void {
  const errors = [];
  const named = new Set<number>();
  for (const [index, { zoneId }] of areas.entries()) {
    if (!known.has(zoneId))
      errors.push({ field: `areas.${index}.zoneId`, message: 'This is no area of the site.' });
    if (named.has(zoneId))
      errors.push({ field: `areas.${index}.zoneId`, message: 'This area is named twice.' });
    named.add(zoneId);
  }
  const missing = [...known].filter((id) => !named.has(id));
  if (missing.length > 0)
    errors.push({
      field: 'areas',
      message: `Name every area of the site; ${missing.join(', ')} ${missing.length === 1 ? 'is' : 'are'} missing.`,
    });
  if (errors.length > 0) throw invalidInput('The order is not whole. Nothing was changed.', errors);
}
