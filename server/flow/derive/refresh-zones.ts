import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { binRatio, zeroBin } from '../../methods/binned-percentile.ts';
import type { Derivation } from './derivation.ts';
import { toldAreas } from './moved-rows.ts';

/** A zone as far as deriving its levels depends on it. */
export interface DerivedZone {
  id: number;
  hasQuantities: boolean;
  /** Whether it began or ceased to carry quantities: its levels in units are then all to be made. */
  unitsChanged: boolean;
}

const zoneRow = z.object({
  zone_id: z.number(),
  has_quantities: z.boolean(),
  units_changed: z.boolean(),
});

/**
 * Temporary table `told_zone`: what the uploads say of each zone, which columns they hold and how far they
 * speak. An upload speaks, for each area that its rows count for, up to its latest accepted time. An area's
 * data-until is the latest over its uploads; a loop's or the site's the earliest over its areas in use:
 * those with a record within 28 days of the site's latest.
 */
export async function tellZones(derivation: Derivation): Promise<DerivedZone[]> {
  const { tx, organisationId, siteId } = derivation;
  await tx.execute(sql`drop table if exists told_zone`);
  await tx.execute(sql`/* what is told of zones */
    create temp table told_zone on commit drop as
    with ${toldAreas(derivation)},
    heard as (
      select
        area_id,
        max(speaks_until) as data_until,
        max(latest_at) as last_record,
        min(first_at) as data_from,
        bool_or(has_quantities) as has_quantities,
        bool_or(has_starts) as has_starts
      from told_area
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
    select
      zone.id as zone_id, said.data_until, said.data_from,
      coalesce(said.has_starts, false) as has_starts,
      coalesce(said.has_quantities, false) as has_quantities,
      coalesce(said.has_quantities, false) <> zone.has_quantities as units_changed
    from zone left join said on said.zone_id = zone.id
    where zone.organisation_id = ${organisationId} and zone.site_id = ${siteId}`);
  const { rows } = await tx.execute(sql`/* zones to derive */
    select zone_id, has_quantities, units_changed from told_zone order by zone_id`);
  return z
    .array(zoneRow)
    .parse(rows)
    .map((row) => ({
      id: row.zone_id,
      hasQuantities: row.has_quantities,
      unitsChanged: row.units_changed,
    }));
}

/** Writes what is told of the zones into them: last, so that a person who changes one need not wait for a load. */
export async function refreshZones(derivation: Derivation): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  await tx.execute(sql`/* refresh zones */
    update zone set
      data_until = told_zone.data_until,
      data_from = told_zone.data_from,
      has_starts = told_zone.has_starts,
      has_quantities = told_zone.has_quantities
    from told_zone
    where organisation_id = ${organisationId} and site_id = ${siteId} and id = zone_id`);
  await refreshWarmUp(derivation);
}

/** Ends each zone's warm-up at its first moment plus the 95th percentile of its flow time, from the bins. */
async function refreshWarmUp({ tx, organisationId, siteId }: Derivation): Promise<void> {
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
