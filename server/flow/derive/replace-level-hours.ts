import { sql, type SQL } from 'drizzle-orm';
import { instantValue } from '../instant-value.ts';
import { lengthReaches } from '../length-reach.ts';
import type { Measure } from '../level-blocks.ts';
import type { Derivation } from './derivation.ts';
import { localHour } from './local-grid.ts';

/** All moments that a stored time may have. */
export const always = { from: Date.UTC(1949, 0, 1), to: Date.UTC(2100, 0, 1) };

/** A zone as far as deriving its levels depends on it. */
export interface DerivedZone {
  id: number;
  hasQuantities: boolean;
}

/** Where a measure's level goes up and down, and by how much. */
interface MeasureSource {
  measure: Measure;
  view: SQL;
  up: SQL;
  down: SQL;
  weight: SQL;
  /** Only zones whose records carry quantities have levels in units. */
  inUnits: boolean;
}

// A sum of integers in a window is an integer; of longer ones it would be an exact decimal, and slow.
const one = sql`1::integer`;
const quantity = sql`coalesce(quantity, 1)`;
const stays = { view: sql`zone_stay`, up: sql`entered`, down: sql`left_at` };
const processes = { view: sql`zone_process`, up: sql`process_from`, down: sql`process_to` };

const sources: readonly MeasureSource[] = [
  { measure: 'inside_jobs', ...stays, weight: one, inUnits: false },
  { measure: 'in_process_jobs', ...processes, weight: one, inUnits: false },
  { measure: 'inside_units', ...stays, weight: quantity, inUnits: true },
  { measure: 'in_process_units', ...processes, weight: quantity, inUnits: true },
];

/**
 * Changes of a level summed by zone and local hour. Changes at one instant are netted before the highest
 * level is read (the window's peers share their sum); a change exactly at the hour's start takes the
 * place of the level before it.
 *
 * @param found statement giving (zone_id, up_at, down_at, weight)
 * @param within which hours to make
 */
const insertHours = (
  { organisationId, siteId, rules }: Derivation,
  measure: Measure,
  found: SQL,
  within: SQL,
): SQL => {
  const hour = localHour(rules, always.from, always.to);
  return sql`
    insert into level_hour (
      organisation_id, site_id, zone_id, measure, hour,
      ups, downs, up_offset, down_offset, highest
    )
    with found as not materialized (${found}),
    level_change as (
      select zone_id, up_at as at, weight as step from found
      union all
      select zone_id, down_at, -weight from found where down_at is not null
    ),
    in_hour as (
      select zone_id, ${hour.of(sql`at`)} as hour, at, step from level_change ${hour.join}
    ),
    running as (
      select
        zone_id, hour, at, step,
        microseconds(at - hour) as offset_microseconds,
        sum(step) over (partition by zone_id, hour order by at) as change
      from in_hour
      where ${within}
    )
    select
      ${organisationId}::integer, ${siteId}::integer, zone_id, ${measure}::level_measure, hour,
      coalesce(sum(step) filter (where step > 0), 0),
      coalesce(-sum(step) filter (where step < 0), 0),
      coalesce(sum(step * offset_microseconds) filter (where step > 0), 0),
      coalesce(-sum(step * offset_microseconds) filter (where step < 0), 0),
      greatest(max(change), case when min(at) > hour then 0 end)
    from running
    group by zone_id, hour`;
};

/**
 * Derives every hour of the given zones afresh from one local hour on (or from the beginning), a zone at a
 * time: short sorts stay in memory.
 */
export async function replaceLevelHours(
  derivation: Derivation,
  zones: readonly DerivedZone[],
  from: number,
): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  const begins = sql`${instantValue(from)}::timestamptz`;
  for (const { id, hasQuantities } of zones) {
    await tx.execute(sql`/* remove level hours */
      delete from level_hour where ${ofSite} and zone_id = ${id} and hour >= ${begins}`);
    for (const { measure, view, up, down, weight, inUnits } of sources) {
      if (inUnits && !hasQuantities) continue;
      await tx.execute(
        sql`/* insert level hours */ ${insertHours(
          derivation,
          measure,
          sql`
          select zone_id, ${up} as up_at, ${down} as down_at, ${weight} as weight
          from ${view}
          where ${ofSite} and zone_id = ${id} and (left_at is null or left_at >= ${begins})`,
          sql`at >= ${begins}`,
        )}`,
      );
    }
  }
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
  for (const source of sources) {
    await findStaysNearTouchedHours(derivation, source);
    await tx.execute(
      sql`/* insert touched level hours */ ${insertHours(
        derivation,
        source.measure,
        sql`select * from stay_near_touched_hour`,
        sql`(zone_id, hour) in (select zone_id, hour from touched_hour)`,
      )}`,
    );
  }
}

/** Temporary table `stay_near_touched_hour`; its size is told to the planner, which would guess it far too small. */
async function findStaysNearTouchedHours(
  { tx, organisationId, siteId }: Derivation,
  { view, up, down, weight, inUnits }: MeasureSource,
): Promise<void> {
  await tx.execute(sql`drop table if exists stay_near_touched_hour`);
  // A long stay may lie in several spans: it is to count once.
  await tx.execute(sql`/* stays near touched hours */
    create temp table stay_near_touched_hour on commit drop as
    select distinct on (near.zone_id, near.job_key, near.ordinal, near.up_at)
      near.zone_id, near.up_at, near.down_at, near.weight
    from touched_span
    join zone on zone.organisation_id = ${organisationId} and zone.site_id = ${siteId}
      and zone.id = touched_span.zone_id
    cross join (${lengthReaches}) as length_reach
    cross join lateral (
      select zone_id, job_key, ordinal, ${up} as up_at, ${down} as down_at, ${weight} as weight
      from ${view}
      where organisation_id = ${organisationId} and site_id = ${siteId}
        and zone_id = touched_span.zone_id
        and length_class = class
        and entered < touched_span.hi
        and entered >= touched_span.lo - reach
        and (left_at is null or left_at >= touched_span.lo)
      offset 0
    ) as near
    where has_quantities or not ${inUnits}::boolean`);
  await tx.execute(sql`analyze stay_near_touched_hour`);
}
