import { changeSite, createSite, listSites, readSite } from '../../../shared/contracts/sites.ts';
import { roleMay } from '../../../shared/permissions.ts';
import { recordAct } from '../../audit/record-act.ts';
import { organisationsOf } from '../../auth/memberships.ts';
import { withTenant } from '../../db/tenant.ts';
import { invalidInput, notAllowed } from '../../errors.ts';
import { applySiteChanges } from '../../sites/change-site.ts';
import { createSiteIn } from '../../sites/create-site.ts';
import { bumpDataVersion } from '../../sites/data-version.ts';
import { findSite, readSites } from '../../sites/present-site.ts';
import { actOf } from '../act-of.ts';
import type { Api } from '../api.ts';

export function registerSites({ route, deps }: Api): void {
  const { db, clock, queue } = deps;

  route(listSites, async ({ actor }) => {
    if (actor.kind !== 'person') throw notAllowed();
    const found = [];
    for (const { id } of await organisationsOf(db, actor.personId, clock.now()))
      found.push(...(await withTenant(db, id, (tx) => readSites(tx, id))));
    return found;
  });

  route(createSite, async (call) => {
    const { actor, body } = call;
    if (actor.kind !== 'person') throw notAllowed();
    const may = (await organisationsOf(db, actor.personId, clock.now())).filter((each) =>
      roleMay(each.role, 'site.create'),
    );
    const organisationId = chosenOrganisation(may, body.organisationId);
    const made = await createSiteIn(db, organisationId, body, clock.now(), (tx, siteId) =>
      recordAct(tx, {
        ...actOf({ ...call, organisationId, siteId }, clock),
        action: 'site.create',
        subjectKind: 'site',
        subjectId: siteId,
        after: { name: body.name, timeZone: body.timeZone, lostFinish: body.lostFinish ?? 'infer' },
      }),
    );
    return withTenant(db, organisationId, (tx) => findSite(tx, organisationId, made));
  });

  route(readSite, ({ organisationId, siteId }) =>
    withTenant(db, organisationId, (tx) => findSite(tx, organisationId, siteId)),
  );

  route(changeSite, async (call) => {
    const { organisationId, siteId, body } = call;
    const changed = await withTenant(db, organisationId, async (tx) => {
      const before = await findSite(tx, organisationId, siteId);
      if (Object.keys(body).length === 0) return before;
      const writer = { tx, organisationId, siteId };
      await applySiteChanges(writer, before, body, clock.now());
      await bumpDataVersion(writer);
      const after = await findSite(tx, organisationId, siteId);
      await recordAct(tx, {
        ...actOf(call, clock),
        action: 'site.change',
        subjectKind: 'site',
        subjectId: siteId,
        before,
        after,
      });
      return after;
    });
    if (changed.busy) await queue.wake(organisationId, siteId);
    return changed;
  });
}

function chosenOrganisation(
  may: readonly { id: number; name: string }[],
  asked: number | undefined,
): number {
  if (asked !== undefined) {
    if (!may.some((each) => each.id === asked)) throw notAllowed();
    return asked;
  }
  const [only, ...more] = may;
  if (!only) throw notAllowed();
  if (more.length > 0)
    throw invalidInput('You may make sites in several organisations: say in which.', [
      {
        field: 'organisationId',
        message: `Name one of: ${may.map((each) => `${each.id} (${each.name})`).join(', ')}.`,
      },
    ]);
  return only.id;
}
