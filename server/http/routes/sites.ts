import { and, eq } from 'drizzle-orm';
import { changeSite, createSite, listSites, readSite } from '../../../shared/contracts/sites.ts';
import { roleMay } from '../../../shared/permissions.ts';
import { recordAct } from '../../audit/record-act.ts';
import { organisationsOf } from '../../auth/memberships.ts';
import type { Transaction } from '../../db/client.ts';
import { site } from '../../db/schema/sites.ts';
import { zone } from '../../db/schema/zones.ts';
import { withTenant } from '../../db/tenant.ts';
import { conflict, invalidInput, notAllowed, notFound, signedOut } from '../../errors.ts';
import { breaks, createSiteIn } from '../../sites/create-site.ts';
import { readSites } from '../../sites/present-site.ts';
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

  route(createSite, async ({ actor, body, requestId }) => {
    if (actor.kind !== 'person') throw signedOut();
    const may = (await organisationsOf(db, actor.personId, clock.now())).filter((each) =>
      roleMay(each.role, 'site.create'),
    );
    const organisationId = chosenOrganisation(may, body.organisationId);
    const siteId = await createSiteIn(db, organisationId, body, clock.now(), (tx, id) =>
      recordAct(tx, {
        organisationId,
        siteId: id,
        at: clock.now(),
        actor,
        action: 'site.create',
        subjectKind: 'site',
        subjectId: id,
        after: { name: body.name, timeZone: body.timeZone, lostFinish: body.lostFinish ?? 'infer' },
        requestId,
      }),
    );
    return withTenant(db, organisationId, (tx) => siteOrNotFound(tx, organisationId, siteId));
  });

  route(readSite, ({ organisationId, siteId }) =>
    withTenant(db, organisationId, (tx) => siteOrNotFound(tx, organisationId, siteId)),
  );

  route(changeSite, async ({ organisationId, siteId, body, actor, requestId }) => {
    const { valuePerJob, ...given } = body;
    const rebuilds = 'lostFinish' in body || 'newPassAfterDays' in body;
    const answer = await withTenant(db, organisationId, async (tx) => {
      const before = await siteOrNotFound(tx, organisationId, siteId);
      const changes = {
        ...given,
        ...(valuePerJob === undefined
          ? {}
          : { valuePerJob: valuePerJob === null ? null : String(valuePerJob) }),
        ...(rebuilds ? { rebuildRequestedAt: clock.now() } : {}),
      };
      if (Object.keys(changes).length > 0)
        await tx
          .update(site)
          .set(changes)
          .where(and(eq(site.organisationId, organisationId), eq(site.id, siteId)));
      if (body.name !== undefined) await renameSiteZone(tx, organisationId, siteId, body.name);
      const after = await siteOrNotFound(tx, organisationId, siteId);
      await recordAct(tx, {
        organisationId,
        siteId,
        at: clock.now(),
        actor,
        action: 'site.change',
        subjectKind: 'site',
        subjectId: siteId,
        before,
        after,
        requestId,
      });
      return after;
    }).catch((error: unknown) => {
      if (breaks(error, 'site_name_once'))
        throw conflict('There is a site of this name already. Choose another name.');
      throw error;
    });
    if (rebuilds) await queue.wake(organisationId, siteId);
    return answer;
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

async function siteOrNotFound(tx: Transaction, organisationId: number, siteId: number) {
  const [found] = await readSites(tx, organisationId, siteId);
  if (!found) throw notFound('The site');
  return found;
}

async function renameSiteZone(
  tx: Transaction,
  organisationId: number,
  siteId: number,
  name: string,
): Promise<void> {
  await tx
    .update(zone)
    .set({ name })
    .where(
      and(eq(zone.organisationId, organisationId), eq(zone.siteId, siteId), eq(zone.kind, 'site')),
    );
}
