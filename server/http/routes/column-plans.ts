import {
  changeColumnPlan,
  listColumnPlans,
  retireColumnPlan,
  saveColumnPlan,
  type SavedPlan as PresentedPlan,
} from '../../../shared/contracts/column-plans.ts';
import { recordAct } from '../../audit/record-act.ts';
import { withTenant } from '../../db/tenant.ts';
import {
  changePlan,
  listSavedPlans,
  retirePlan,
  savePlan,
  type SavedPlan,
} from '../../intake/column-plans.ts';
import { checkPlan } from '../../intake/plan-part.ts';
import { actOf } from '../act-of.ts';
import type { Api, Call } from '../api.ts';

const present = ({ id, name, plan, savedBy, savedAt }: SavedPlan): PresentedPlan => ({
  id,
  name,
  plan,
  savedBy,
  savedAt: savedAt.toISOString(),
});

export function registerColumnPlans({ route, deps }: Api): void {
  const { db, clock } = deps;
  const siteOf = ({ organisationId, siteId }: Call<unknown, unknown, unknown>) => ({
    organisationId,
    siteId,
  });
  const saving = ({ actor }: Call<unknown, unknown, unknown>) => ({
    savedBy: actor.kind === 'person' ? actor.personId : null,
    savedAt: clock.now(),
  });
  const subject = (plan: SavedPlan) => ({ subjectKind: 'column plan', subjectId: plan.id });

  route(listColumnPlans, async (call) => (await listSavedPlans(db, siteOf(call))).map(present));

  route(saveColumnPlan, (call) => {
    const plan = checkPlan(call.body.plan);
    return withTenant(db, call.organisationId, async (tx) => {
      const saved = await savePlan(tx, siteOf(call), { ...call.body, plan, ...saving(call) });
      await recordAct(tx, {
        ...actOf(call, clock),
        ...subject(saved),
        action: 'column-plan.save',
        after: present(saved),
      });
      return present(saved);
    });
  });

  route(changeColumnPlan, (call) => {
    const plan = call.body.plan && checkPlan(call.body.plan);
    return withTenant(db, call.organisationId, async (tx) => {
      const change = { ...call.body, plan, ...saving(call) };
      const { before, after } = await changePlan(tx, siteOf(call), call.params.planId, change);
      await recordAct(tx, {
        ...actOf(call, clock),
        ...subject(after),
        action: 'column-plan.save',
        before: present(before),
        after: present(after),
      });
      return present(after);
    });
  });

  route(retireColumnPlan, (call) =>
    withTenant(db, call.organisationId, async (tx) => {
      const before = await retirePlan(tx, siteOf(call), call.params.planId, clock.now());
      await recordAct(tx, {
        ...actOf(call, clock),
        ...subject(before),
        action: 'column-plan.save',
        before: present(before),
      });
      return {};
    }),
  );
}
