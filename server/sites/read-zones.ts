import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { Zone } from '../../shared/contracts/zones.ts';
import type { Transaction } from '../db/client.ts';
import { notFound } from '../errors.ts';

const date = z.coerce.date().nullable();
const zoneRow = z.object({
  id: z.number(),
  kind: z.enum(['area', 'loop', 'site']),
  name: z.string(),
  area_ids: z.array(z.number()),
  position: z.number().nullable(),
  cap_limit: z.coerce.number().nullable(),
  cap_unit: z.enum(['jobs', 'units']).nullable(),
  cap_from: date,
  servers: z.coerce.number().nullable(),
  counts_from: z.enum(['arrival', 'start']),
  state: z.enum(['ready', 'deriving']),
  data_from: date,
  data_until: date,
  warm_until: date,
});

/**
 * The zones of a site: areas in order of flow, then loops, then the site. Areas that are merged into another
 * bear no records and are left out, also of the areas that loops and the site are made of.
 */
export const readZones = (
  tx: Transaction,
  organisationId: number,
  siteId: number,
): Promise<Zone[]> => selectZones(tx, { organisationId, siteId, onlyZone: null, merged: false });

/** The same, with the areas that are merged into another. */
export const readEveryZone = (
  tx: Transaction,
  organisationId: number,
  siteId: number,
): Promise<Zone[]> => selectZones(tx, { organisationId, siteId, onlyZone: null, merged: true });

async function selectZones(
  tx: Transaction,
  {
    organisationId,
    siteId,
    onlyZone,
    merged,
  }: { organisationId: number; siteId: number; onlyZone: number | null; merged: boolean },
): Promise<Zone[]> {
  const { rows } = await tx.execute(sql`/* zones of a site */
    with hidden as (
      select area_id from area_move
      where organisation_id = ${organisationId} and site_id = ${siteId}
        and valid_from is null and not ${merged}::boolean
    )
    select
      zone.id, zone.kind, zone.name, area.position, zone.counts_from, zone.state,
      zone.data_from, zone.data_until, zone.warm_until,
      coalesce(
        (
          select array_agg(spanned.id order by spanned.position, spanned.id)
          from area as spanned
          where spanned.organisation_id = ${organisationId} and spanned.site_id = ${siteId}
            and (zone.kind = 'area' or spanned.id not in (select area_id from hidden))
            and case zone.kind
              when 'area' then spanned.id = zone.id
              when 'site' then true
              else exists (
                select from zone_area
                where zone_area.organisation_id = ${organisationId}
                  and zone_area.site_id = ${siteId}
                  and zone_area.zone_id = zone.id
                  and zone_area.area_id = spanned.id
              )
            end
        ),
        '{}'
      ) as area_ids,
      latest_cap.limit as cap_limit, latest_cap.unit as cap_unit, latest_cap.valid_from as cap_from,
      latest_servers.amount as servers
    from zone
    left join area
      on area.organisation_id = zone.organisation_id
      and area.site_id = zone.site_id
      and area.id = zone.id
    left join lateral (
      select "limit", unit, valid_from from cap
      where cap.organisation_id = ${organisationId} and cap.site_id = ${siteId}
        and cap.zone_id = zone.id
      order by valid_from desc, id desc limit 1
    ) as latest_cap on true
    left join lateral (
      select amount from zone_fact
      where zone_fact.organisation_id = ${organisationId} and zone_fact.site_id = ${siteId}
        and zone_fact.zone_id = zone.id and zone_fact.kind = 'servers'
      order by valid_from desc limit 1
    ) as latest_servers on true
    where zone.organisation_id = ${organisationId} and zone.site_id = ${siteId}
      and case when ${onlyZone}::integer is null
        then zone.id not in (select area_id from hidden)
        else zone.id = ${onlyZone}::integer
      end
    order by zone.kind, area.position, zone.name, zone.id`);
  return z.array(zoneRow).parse(rows).map(presentZone);
}

/** One zone of a site, be it a merged area. @throws ApiError not-found */
export async function findZone(
  tx: Transaction,
  organisationId: number,
  siteId: number,
  zoneId: number,
): Promise<Zone> {
  const site = { organisationId, siteId };
  const [found] = await selectZones(tx, { ...site, onlyZone: zoneId, merged: false });
  if (!found) throw notFound('The zone');
  return found;
}

function presentZone(row: z.infer<typeof zoneRow>): Zone {
  return {
    id: row.id,
    kind: row.kind,
    name: row.name,
    areaIds: row.area_ids,
    position: row.position,
    cap:
      row.cap_limit === null || row.cap_unit === null || row.cap_from === null
        ? null
        : { limit: row.cap_limit, unit: row.cap_unit, from: row.cap_from.toISOString() },
    servers: row.servers,
    countsFrom: row.counts_from,
    state: row.state,
    dataFrom: row.data_from?.toISOString() ?? null,
    dataUntil: row.data_until?.toISOString() ?? null,
    warmUntil: row.warm_until?.toISOString() ?? null,
  };
}
