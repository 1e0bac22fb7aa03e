import { moveArea, readAreas, undoAreaMove } from '../../../shared/contracts/areas.ts';
import { recordAct } from '../../audit/record-act.ts';
import { withTenant } from '../../db/tenant.ts';
import { bumpDataVersion } from '../../sites/data-version.ts';
import { addAreaMove, removeAreaMove } from '../../sites/move-area.ts';
import { readAreasOf } from '../../sites/read-areas.ts';
import { actOf } from '../act-of.ts';
import type { Api } from '../api.ts';

export function registerAreas({ route, deps }: Api): void {
  const { db, clock, queue } = deps;

  route(readAreas, ({ organisationId, siteId }) =>
    withTenant(db, organisationId, (tx) => readAreasOf(tx, organisationId, siteId)),
  );

  route(moveArea, async (call) => {
    const { organisationId, siteId, actor, body } = call;
    const made = await withTenant(db, organisationId, async (tx) => {
      const writer = { tx, organisationId, siteId };
      const after = await addAreaMove(writer, body, {
        movedBy: actor.kind === 'person' ? actor.personId : null,
        movedAt: clock.now(),
      });
      await bumpDataVersion(writer);
      await recordAct(tx, {
        ...actOf(call, clock),
        action: 'area.move',
        subjectKind: 'area move',
        subjectId: after.id,
        after,
      });
      return after;
    });
    await queue.wake(organisationId, siteId);
    return made;
  });

  route(undoAreaMove, async (call) => {
    const { organisationId, siteId, params } = call;
    await withTenant(db, organisationId, async (tx) => {
      const writer = { tx, organisationId, siteId };
      const before = await removeAreaMove(writer, params.moveId, clock.now());
      await bumpDataVersion(writer);
      await recordAct(tx, {
        ...actOf(call, clock),
        action: 'area.move',
        subjectKind: 'area move',
        subjectId: params.moveId,
        before,
      });
    });
    await queue.wake(organisationId, siteId);
    return {};
  });
}
