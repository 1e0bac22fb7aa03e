import { and, eq, inArray, sql } from 'drizzle-orm';
import type { Site } from '../../shared/contracts/sites.ts';
import type { Transaction } from '../db/client.ts';
import { organisation } from '../db/schema/people.ts';
import { site } from '../db/schema/sites.ts';
import { upload } from '../db/schema/uploads.ts';
import { zone } from '../db/schema/zones.ts';
import { notFound } from '../errors.ts';

/** The sites of the running tenant, by name; one of them where an id is given. */
export async function readSites(
  tx: Transaction,
  organisationId: number,
  onlySite: number | null = null,
): Promise<Site[]> {
  const rows = await tx
    .select({
      site,
      organisationName: organisation.name,
      dataFrom: zone.dataFrom,
      dataUntil: zone.dataUntil,
      busy: isBusy(),
    })
    .from(site)
    .innerJoin(organisation, eq(organisation.id, site.organisationId))
    .leftJoin(
      zone,
      and(
        eq(zone.organisationId, site.organisationId),
        eq(zone.siteId, site.id),
        eq(zone.kind, 'site'),
      ),
    )
    .where(
      and(
        eq(site.organisationId, organisationId),
        onlySite === null ? undefined : eq(site.id, onlySite),
      ),
    )
    .orderBy(site.name);
  return rows.map(({ site: row, ...more }) => ({
    id: row.id,
    organisationId: row.organisationId,
    organisationName: more.organisationName,
    name: row.name,
    timeZone: row.timeZone,
    currency: row.currency,
    valuePerJob: row.valuePerJob === null ? null : Number(row.valuePerJob),
    lostFinish: row.lostFinish,
    newPassAfterDays: row.newPassAfterDays,
    dataFrom: more.dataFrom?.toISOString() ?? null,
    dataUntil: more.dataUntil?.toISOString() ?? null,
    busy: more.busy,
  }));
}

/** One site of the running tenant. @throws ApiError not-found */
export async function findSite(
  tx: Transaction,
  organisationId: number,
  siteId: number,
): Promise<Site> {
  const [found] = await readSites(tx, organisationId, siteId);
  if (!found) throw notFound('The site');
  return found;
}

/** Whether figures still have to catch up: an upload or a withdrawal waits, or a zone is being derived. */
const isBusy = () => sql<boolean>`(
  ${site.rebuildRequestedAt} is not null
  or exists (
    select from ${upload}
    where ${upload.organisationId} = ${site.organisationId} and ${upload.siteId} = ${site.id}
      and (
        ${inArray(upload.status, ['waiting', 'reading', 'loading'])}
        or (${upload.withdrawRequestedAt} is not null and ${upload.status} = 'loaded')
      )
  )
  or exists (
    select from ${zone} as deriving
    where deriving.organisation_id = ${site.organisationId} and deriving.site_id = ${site.id}
      and deriving.state = 'deriving'
  )
)`;
