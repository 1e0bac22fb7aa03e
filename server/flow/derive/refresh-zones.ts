import { sql } from 'drizzle-orm';
import { binRatio, zeroBin } from '../../methods/binned-percentile.ts';
import type { Derivation } from './derivation.ts';

/**
 * What the uploads say of each zone: which columns they hold, and how far they speak. An upload speaks,
 * for each area in it, up to its latest accepted time. An area's data-until is the latest over its
 * uploads; a loop's or the site's the earliest over its areas in use: those with a record within 28 days
 * of the site's latest.
 *
 * @returns whether a zone began or ceased to carry quantities: its levels in units are then to be made
 */
export async function refreshZones(derivation: Derivation): Promise<{ unitsChanged: number[] }> {
  const { tx, organisationId, siteId } = derivation;
  const { rows } = await tx.execute(sql`/* refresh zones */
    with heard as (
      select
        area_id,
        max(speaks_until) as data_until,
        max(latest_at) as last_record,
        min(first_at) as data_from,
        bool_or(has_quantities) as has_quantities,
        bool_or(has_starts) as has_starts
      from upload_area
      where organisation_id = ${organisationId} and site_id = ${siteId}
      group by area_id
    ),
    in_use as (
      select *, last_record >= max(last_record) over () - interval '28 days' as used from heard
    ),
    spanned as (
      select zone.id as zone_id, area.id as area_id
      from zone join area using (organisation_id, site_id)
      where organisation_id = ${organisationId} and site_id = ${siteId}
        and case zone.kind
          when 'area' then area.id = zone.id
          when 'site' then true
          else exists (
            select from zone_area
            where zone_area.organisation_id = ${organisationId} and zone_area.site_id = ${siteId}
              and zone_area.zone_id = zone.id and zone_area.area_id = area.id
          )
        end
    ),
    said as (
      select
        zone_id,
        coalesce(min(data_until) filter (where used), max(data_until)) as data_until,
        min(data_from) as data_from,
        coalesce(bool_or(has_quantities), false) as has_quantities,
        coalesce(bool_or(has_starts), false) as has_starts
      from spanned left join in_use using (area_id)
      group by zone_id
    )
    update zone set
      data_until = said.data_until,
      data_from = said.data_from,
      has_starts = coalesce(said.has_starts, false),
      has_quantities = coalesce(said.has_quantities, false)
    from zone as before left join said on said.zone_id = before.id
    where before.organisation_id = ${organisationId} and before.site_id = ${siteId}
      and zone.organisation_id = before.organisation_id and zone.site_id = before.site_id
      and zone.id = before.id
    returning zone.id, zone.has_quantities <> before.has_quantities as units_changed`);
  return {
    unitsChanged: rows.filter((row) => row.units_changed === true).map((row) => Number(row.id)),
  };
}

/** Ends each zone's warm-up at its first moment plus the 95th percentile of its flow time, from the bins. */
export async function refreshWarmUp({ tx, organisationId, siteId }: Derivation): Promise<void> {
  await tx.execute(sql`/* warm-up */
    with binned as (
      select zone_id, bin, sum(departed) as departed
      from flow_day, unnest(bins, counts) as histogram (bin, departed)
      where organisation_id = ${organisationId} and site_id = ${siteId}
      group by zone_id, bin
    ),
    ranked as (
      select
        zone_id, bin,
        sum(departed) over (partition by zone_id order by bin) as reached,
        sum(departed) over (partition by zone_id) as total
      from binned
    ),
    typical as (
      select zone_id, min(bin) as bin from ranked where reached >= 0.95 * total group by zone_id
    )
    update zone set warm_until = data_from + make_interval(secs => coalesce(
      (
        select case bin when ${zeroBin}::integer then 0
          else ${binRatio}::double precision ^ (bin + 0.5) end
        from typical where typical.zone_id = zone.id
      ),
      0
    ))
    where organisation_id = ${organisationId} and site_id = ${siteId}`);
}
