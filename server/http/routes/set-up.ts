import { confirmSetUp, readSetUp } from '../../../shared/contracts/set-up.ts';
import { recordAct } from '../../audit/record-act.ts';
import { withTenant } from '../../db/tenant.ts';
import { bumpDataVersion } from '../../sites/data-version.ts';
import { applySetUp, readSetUpOf } from '../../sites/set-up.ts';
import { actOf } from '../act-of.ts';
import type { Api } from '../api.ts';

export function registerSetUp({ route, deps }: Api): void {
  const { db, clock } = deps;

  route(readSetUp, ({ organisationId, siteId }) =>
    withTenant(db, organisationId, (tx) => readSetUpOf(tx, organisationId, siteId)),
  );

  route(confirmSetUp, (call) => {
    const { organisationId, siteId, body } = call;
    return withTenant(db, organisationId, async (tx) => {
      const writer = { tx, organisationId, siteId };
      const before = await readSetUpOf(tx, organisationId, siteId);
      await applySetUp(writer, body.areas);
      await bumpDataVersion(writer);
      const after = await readSetUpOf(tx, organisationId, siteId);
      await recordAct(tx, {
        ...actOf(call, clock),
        action: 'zone.change',
        subjectKind: 'set-up',
        subjectId: siteId,
        before,
        after,
      });
      return after;
    });
  });
}
