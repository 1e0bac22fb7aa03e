import { sql, type SQL } from 'drizzle-orm';
import { lengthReaches } from '../length-reach.ts';
import type { Derivation } from './derivation.ts';
import { hourOf, hourStretchRows } from './local-grid.ts';

/** All moments that a stored time may have. */
export const always = { from: Date.UTC(1949, 0, 1), to: Date.UTC(2100, 0, 1) };

/**
 * Changes of levels, as rows (zone_id, measure, at, step): who came in or left, and who went into or out
 * of process; in units too for zones whose records carry quantities.
 *
 * @param stays statement giving (zone_id, has_quantities, entered, left_at, quantity)
 * @param processes statement giving (zone_id, has_quantities, process_from, process_to, quantity)
 */
const levelChanges = (stays: SQL, processes: SQL): SQL => sql`
  stays as (${stays}),
  processes as (${processes}),
  level_change as (
    select zone_id, 'inside_jobs'::level_measure as measure, entered as at, 1::numeric as step from stays
    union all
    select zone_id, 'inside_jobs', left_at, -1 from stays where left_at is not null
    union all
    select zone_id, 'inside_units', entered, coalesce(quantity, 1) from stays where has_quantities
    union all
    select zone_id, 'inside_units', left_at, -coalesce(quantity, 1) from stays
    where has_quantities and left_at is not null
    union all
    select zone_id, 'in_process_jobs', process_from, 1 from processes
    union all
    select zone_id, 'in_process_jobs', process_to, -1 from processes where process_to is not null
    union all
    select zone_id, 'in_process_units', process_from, coalesce(quantity, 1) from processes
    where has_quantities
    union all
    select zone_id, 'in_process_units', process_to, -coalesce(quantity, 1) from processes
    where has_quantities and process_to is not null
  )`;

/**
 * Changes summed by zone, measure and local hour. Changes at one instant are netted before the highest
 * level is read; a change exactly at the hour's start takes the place of the level before it.
 */
const hoursOfChanges = (derivation: Derivation, within: SQL): SQL => sql`
  hour_stretch as (${hourStretchRows(derivation.rules, always.from, always.to)}),
  in_hour as (
    select zone_id, measure, ${hourOf(sql`at`)} as hour, at, step
    from level_change join hour_stretch on at >= begins and at < until
  ),
  at_instant as (
    select
      zone_id, measure, hour, at,
      coalesce(sum(step) filter (where step > 0), 0) as ups,
      coalesce(-sum(step) filter (where step < 0), 0) as downs
    from in_hour
    where ${within}
    group by zone_id, measure, hour, at
  ),
  running as (
    select
      *,
      round(date_part('epoch', at - hour) * 1000000)::bigint as offset_microseconds,
      sum(ups - downs) over (
        partition by zone_id, measure, hour order by at rows unbounded preceding
      ) as change
    from at_instant
  )
  select
    ${derivation.organisationId}::integer, ${derivation.siteId}::integer, zone_id, measure, hour,
    sum(ups), sum(downs),
    sum(ups * offset_microseconds), sum(downs * offset_microseconds),
    greatest(max(change), case when min(at) > hour then 0 end)
  from running
  group by zone_id, measure, hour`;

const insertInto = sql`insert into level_hour (
  organisation_id, site_id, zone_id, measure, hour,
  ups, downs, up_offset, down_offset, highest
)`;

/** Derives every hour of the given zones afresh. */
export async function replaceAllLevelHours(
  derivation: Derivation,
  zoneIds: readonly number[],
): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  const zones = sql`${sql.param(zoneIds)}::integer[]`;
  const ofZones = sql`organisation_id = ${organisationId} and site_id = ${siteId}
    and zone_id = any(${zones})`;
  await tx.execute(sql`/* remove level hours */ delete from level_hour where ${ofZones}`);
  await tx.execute(sql`/* insert level hours */
    ${insertInto}
    with ${levelChanges(
      sql`
        select zone_id, has_quantities, entered, left_at, quantity
        from zone_stay join (
          select id as zone_id, has_quantities from zone
          where organisation_id = ${organisationId} and site_id = ${siteId}
        ) as zone using (zone_id)
        where ${ofZones}`,
      sql`
        select zone_id, has_quantities, process_from, process_to, quantity
        from zone_process join (
          select id as zone_id, has_quantities from zone
          where organisation_id = ${organisationId} and site_id = ${siteId}
        ) as zone using (zone_id)
        where ${ofZones}`,
    )},
    ${hoursOfChanges(derivation, sql`true`)}`);
}

/**
 * Derives only the hours named in temporary table `touched_hour` (zone_id, hour) afresh. Stays are found
 * by their length class within spans of neighbouring hours, given by `touched_span` (zone_id, lo, hi).
 */
export async function replaceTouchedLevelHours(derivation: Derivation): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  await tx.execute(sql`/* remove touched level hours */
    delete from level_hour using touched_hour
    where organisation_id = ${organisationId} and site_id = ${siteId}
      and level_hour.zone_id = touched_hour.zone_id and level_hour.hour = touched_hour.hour`);
  // A long stay may lie in several spans: it is to count once.
  const near = (view: SQL, columns: SQL) => sql`
    select distinct on (near.zone_id, near.job_key, near.ordinal ${columns})
      near.zone_id, has_quantities, near.entered, near.left_at, near.quantity ${columns}
    from touched_span
    join zone on zone.organisation_id = ${organisationId} and zone.site_id = ${siteId}
      and zone.id = touched_span.zone_id
    cross join length_reach
    cross join lateral (
      select * from ${view} as found
      where found.organisation_id = ${organisationId} and found.site_id = ${siteId}
        and found.zone_id = touched_span.zone_id
        and found.length_class = length_reach.class
        and found.entered < touched_span.hi
        and found.entered >= touched_span.lo - length_reach.reach
        and (found.left_at is null or found.left_at >= touched_span.lo)
    ) as near`;
  await tx.execute(sql`/* insert touched level hours */
    ${insertInto}
    with length_reach as (${lengthReaches}),
    ${levelChanges(near(sql`zone_stay`, sql``), near(sql`zone_process`, sql`, near.process_from, near.process_to`))},
    ${hoursOfChanges(
      derivation,
      sql`exists (
        select from touched_hour
        where touched_hour.zone_id = in_hour.zone_id and touched_hour.hour = in_hour.hour
      )`,
    )}`);
}
