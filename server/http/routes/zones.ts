import { and, eq } from 'drizzle-orm';
import type { z } from 'zod';
import { changeZone, createZone, listZones, readZone } from '../../../shared/contracts/zones.ts';
import { recordAct } from '../../audit/record-act.ts';
import { area, zone } from '../../db/schema/zones.ts';
import { withTenant } from '../../db/tenant.ts';
import { invalidInput, notFound } from '../../errors.ts';
import { bumpDataVersion } from '../../sites/data-version.ts';
import { readZones } from '../../sites/read-zones.ts';
import {
  createArea,
  createLoop,
  declareServers,
  refuseTakenName,
  setLoopAreas,
  type SiteWriter,
} from '../../sites/write-zones.ts';
import type { Api } from '../api.ts';

export function registerZones({ route, deps }: Api): void {
  const { db, clock, queue } = deps;

  route(listZones, ({ organisationId, siteId }) =>
    withTenant(db, organisationId, (tx) => readZones(tx, organisationId, siteId)),
  );

  route(readZone, ({ organisationId, siteId, params }) =>
    withTenant(db, organisationId, (tx) =>
      zoneOrNotFound({ tx, organisationId, siteId }, params.zoneId),
    ),
  );

  route(createZone, async ({ organisationId, siteId, body, actor, requestId }) => {
    const answer = await withTenant(db, organisationId, async (tx) => {
      const writer = { tx, organisationId, siteId };
      const id =
        body.kind === 'area' ? await createArea(writer, body) : await createLoop(writer, body);
      const after = await zoneOrNotFound(writer, id);
      await bumpDataVersion(writer);
      await recordAct(tx, {
        organisationId,
        siteId,
        at: clock.now(),
        actor,
        action: 'zone.create',
        subjectKind: 'zone',
        subjectId: id,
        after,
        requestId,
      });
      return after;
    });
    if (answer.state === 'deriving') await queue.wake(organisationId, siteId);
    return answer;
  });

  route(changeZone, async ({ organisationId, siteId, params, body, actor, requestId }) => {
    const { zoneId } = params;
    const answer = await withTenant(db, organisationId, async (tx) => {
      const writer = { tx, organisationId, siteId };
      const before = await zoneOrNotFound(writer, zoneId);
      await applyChanges(writer, before, body);
      const after = await zoneOrNotFound(writer, zoneId);
      await bumpDataVersion(writer);
      await recordAct(tx, {
        organisationId,
        siteId,
        at: clock.now(),
        actor,
        action: 'zone.change',
        subjectKind: 'zone',
        subjectId: zoneId,
        before,
        after,
        requestId,
      });
      return after;
    });
    if (answer.state === 'deriving') await queue.wake(organisationId, siteId);
    return answer;
  });
}

async function zoneOrNotFound({ tx, organisationId, siteId }: SiteWriter, zoneId: number) {
  const [found] = await readZones(tx, organisationId, siteId, zoneId);
  if (!found) throw notFound('The zone');
  return found;
}

type ZoneNow = Awaited<ReturnType<typeof zoneOrNotFound>>;
type ZoneChanges = z.output<typeof changeZone.body>;

async function applyChanges(
  writer: SiteWriter,
  before: ZoneNow,
  changes: ZoneChanges,
): Promise<void> {
  refuseMisplaced(before, changes);
  const { tx, organisationId, siteId } = writer;
  const { name, countsFrom, servers, serversFrom, position, areaIds } = changes;
  if (name !== undefined) await refuseTakenName(writer, before.kind, name, before.id);
  if (areaIds) await setLoopAreas(writer, before.id, areaIds);
  if (servers !== undefined)
    await declareServers(
      writer,
      before.id,
      servers,
      serversFrom === undefined ? null : new Date(serversFrom),
    );
  if (position !== undefined)
    await tx
      .update(area)
      .set({ position })
      .where(
        and(
          eq(area.organisationId, organisationId),
          eq(area.siteId, siteId),
          eq(area.id, before.id),
        ),
      );
  const derives =
    areaIds !== undefined || (countsFrom !== undefined && countsFrom !== before.countsFrom);
  const ownColumns = {
    ...(name === undefined ? {} : { name }),
    ...(countsFrom === undefined ? {} : { countsFrom }),
    ...(derives ? { state: 'deriving' as const } : {}),
  };
  if (Object.keys(ownColumns).length > 0)
    await tx
      .update(zone)
      .set(ownColumns)
      .where(
        and(
          eq(zone.organisationId, organisationId),
          eq(zone.siteId, siteId),
          eq(zone.id, before.id),
        ),
      );
}

function refuseMisplaced(before: ZoneNow, changes: ZoneChanges): void {
  const errors = [];
  if (changes.areaIds && before.kind !== 'loop')
    errors.push({ field: 'areaIds', message: 'Only a loop is made of chosen areas.' });
  if (changes.position !== undefined && before.kind !== 'area')
    errors.push({ field: 'position', message: 'Only an area has a place in the flow.' });
  if (changes.serversFrom !== undefined && changes.servers === undefined)
    errors.push({ field: 'serversFrom', message: 'Say how many servers there are from then on.' });
  if (errors.length > 0) throw invalidInput('Some of this does not go with such a zone.', errors);
}
