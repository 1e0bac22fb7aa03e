import { changeZone, createZone, listZones, readZone } from '../../../shared/contracts/zones.ts';
import { recordAct } from '../../audit/record-act.ts';
import { withTenant } from '../../db/tenant.ts';
import { applyZoneChanges } from '../../sites/change-zone.ts';
import { bumpDataVersion } from '../../sites/data-version.ts';
import { findZone, readZones } from '../../sites/read-zones.ts';
import { createArea } from '../../sites/write-areas.ts';
import { createLoop } from '../../sites/write-loops.ts';
import { actOf } from '../act-of.ts';
import type { Api } from '../api.ts';

export function registerZones({ route, deps }: Api): void {
  const { db, clock, queue } = deps;

  route(listZones, ({ organisationId, siteId }) =>
    withTenant(db, organisationId, (tx) => readZones(tx, organisationId, siteId)),
  );

  route(readZone, ({ organisationId, siteId, params }) =>
    withTenant(db, organisationId, (tx) => findZone(tx, organisationId, siteId, params.zoneId)),
  );

  route(createZone, async (call) => {
    const { organisationId, siteId, body } = call;
    const made = await withTenant(db, organisationId, async (tx) => {
      const writer = { tx, organisationId, siteId };
      const id =
        body.kind === 'area' ? await createArea(writer, body) : await createLoop(writer, body);
      const after = await findZone(tx, organisationId, siteId, id);
      await bumpDataVersion(writer);
      await recordAct(tx, {
        ...actOf(call, clock),
        action: 'zone.create',
        subjectKind: 'zone',
        subjectId: id,
        after,
      });
      return after;
    });
    if (made.state === 'deriving') await queue.wake(organisationId, siteId);
    return made;
  });

  route(changeZone, async (call) => {
    const { organisationId, siteId, params, body } = call;
    const changed = await withTenant(db, organisationId, async (tx) => {
      const writer = { tx, organisationId, siteId };
      const before = await findZone(tx, organisationId, siteId, params.zoneId);
      if (Object.keys(body).length === 0) return before;
      await applyZoneChanges(writer, before, body);
      const after = await findZone(tx, organisationId, siteId, params.zoneId);
      await bumpDataVersion(writer);
      await recordAct(tx, {
        ...actOf(call, clock),
        action: 'zone.change',
        subjectKind: 'zone',
        subjectId: params.zoneId,
        before,
        // A number of servers from a date on does not show in the zone as it is now.
        after: { ...after, ...(body.serversFrom ? { serversFrom: body.serversFrom } : {}) },
      });
      return after;
    });
    if (changed.state === 'deriving') await queue.wake(organisationId, siteId);
    return changed;
  });
}
