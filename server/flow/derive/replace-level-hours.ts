import { sql, type SQL } from 'drizzle-orm';
import { instantValue } from '../instant-value.ts';
import { lengthReaches } from '../length-reach.ts';
import type { Measure } from '../../db/schema/levels.ts';
import type { Derivation } from './derivation.ts';
import { localHour } from './local-grid.ts';
import type { DerivedZone } from './refresh-zones.ts';

/** All moments that a stored time may have. */
export const always = { from: Date.UTC(1949, 0, 1), to: Date.UTC(2100, 0, 1) };

/** The two levels of one unit, which rise and fall by the same weight. */
interface Levels {
  inside: Measure;
  inProcess: Measure;
  weight: SQL;
  /** Only zones whose records carry quantities have levels in units. */
  inUnits: boolean;
}

const levels: readonly Levels[] = [
  // A sum of integers in a window is an integer; of longer ones it would be an exact decimal, and slow.
  { inside: 'inside_jobs', inProcess: 'in_process_jobs', weight: sql`1::integer`, inUnits: false },
  {
    inside: 'inside_units',
    inProcess: 'in_process_units',
    weight: sql`coalesce(quantity, 1)`,
    inUnits: true,
  },
];

/** Sums over an hour of one level's steps, in columns whose names begin with the level's. */
const sumsOf = (level: string): SQL => {
  const named = (what: string) => sql.identifier(`${level}_${what}`);
  const step = sql.identifier(level);
  return sql`
    coalesce(sum(${step}) filter (where ${step} > 0), 0) as ${named('ups')},
    coalesce(-sum(${step}) filter (where ${step} < 0), 0) as ${named('downs')},
    coalesce(sum(${step} * after_microseconds) filter (where ${step} > 0), 0) as ${named('up_offset')},
    coalesce(-sum(${step} * after_microseconds) filter (where ${step} < 0), 0) as ${named('down_offset')},
    max(${named('change')}) filter (where ${step} <> 0) as ${named('highest')},
    min(at) filter (where ${step} <> 0) > hour as ${named('keeps_start')}`;
};

/** A row (measure, ups, downs, up_offset, down_offset, highest) from the sums of one level. */
const rowOf = (measure: Measure, level: string): SQL => {
  const named = (what: string) => sql.identifier(`${level}_${what}`);
  return sql`(
    ${measure}::text,
    ${named('ups')}, ${named('downs')}, ${named('up_offset')}, ${named('down_offset')},
    greatest(
      ${named('highest')} - ${named('before')},
      case when ${named('keeps_start')} then 0 end
    )
  )`;
};

/**
 * Changes of both levels summed by zone and local hour. Changes at one instant are netted before the highest
 * level is read (the window's peers share their sum); a change exactly at the hour's start takes the
 * place of the level before it. The window runs on from hour to hour, for it is sorted by time alone
 * where the zone is a constant: what came before the hour is taken off afterwards.
 *
 * @param zone the zone of a change: a constant where there is one, else column `zone_id`
 * @param spans statement giving (zone_id, inside_from, process_from, until, quantity) of `zone_span`
 * @param within which hours to make
 */
const insertHours = (
  { organisationId, siteId, rules }: Derivation,
  { inside, inProcess, weight }: Levels,
  { zone, spans, within }: { zone: SQL; spans: SQL; within: SQL },
): SQL => {
  const hour = localHour(rules, always.from, always.to);
  return sql`
    insert into level_hour (
      organisation_id, site_id, zone_id, measure, hour,
      ups, downs, up_offset, down_offset, highest
    )
    with span as materialized (${spans}),
    level_change as (
      select zone_id, inside_from as at, ${weight} as inside, 0 as in_process
      from span where inside_from is not null
      union all
      select zone_id, process_from, 0, ${weight} from span where process_from is not null
      union all
      select
        zone_id, until,
        case when inside_from is null then 0 else -${weight} end,
        case when process_from is null then 0 else -${weight} end
      from span where until is not null
    ),
    in_hour as (
      select zone_id, at, ${hour.of(sql`at`)} as hour, inside, in_process
      from level_change ${hour.join}
    ),
    running as (
      select
        ${zone} as zone_id, hour, at, inside, in_process,
        microseconds(at - hour) as after_microseconds,
        sum(inside) over in_order as inside_change,
        sum(in_process) over in_order as in_process_change
      from in_hour
      where ${within}
      window in_order as (partition by ${zone} order by at)
    ),
    summed as (
      select zone_id, hour, ${sumsOf('inside')}, ${sumsOf('in_process')}
      from running
      group by zone_id, hour
    ),
    placed as (
      select
        *,
        coalesce(sum(inside_ups - inside_downs) over earlier, 0) as inside_before,
        coalesce(sum(in_process_ups - in_process_downs) over earlier, 0) as in_process_before
      from summed
      window earlier as (
        partition by zone_id order by hour rows between unbounded preceding and 1 preceding
      )
    )
    select
      ${organisationId}::integer, ${siteId}::integer, zone_id, measure, hour,
      ups, downs, up_offset, down_offset, highest
    from placed cross join lateral (
      values ${rowOf(inside, 'inside')}, ${rowOf(inProcess, 'in_process')}
    ) as level (measure, ups, downs, up_offset, down_offset, highest)
    where ups + downs > 0`;
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
    const spans = sql`
      select zone_id, inside_from, process_from, until, quantity
      from zone_span
      where ${ofSite} and zone_id = ${id} and (left_at is null or left_at >= ${begins})`;
    for (const each of levels.filter(({ inUnits }) => hasQuantities || !inUnits))
      await tx.execute(
        sql`/* insert level hours */ ${insertHours(derivation, each, {
          zone: sql`${id}::integer`,
          spans,
          within: sql`at >= ${begins}`,
        })}`,
      );
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
  await findSpansNearTouchedHours(derivation);
  for (const each of levels)
    await tx.execute(
      sql`/* insert touched level hours */ ${insertHours(derivation, each, {
        zone: sql`zone_id`,
        spans: sql`
          select zone_id, inside_from, process_from, until, quantity
          from span_near_touched_hour where has_quantities or not ${each.inUnits}::boolean`,
        within: sql`(zone_id, hour) in (select zone_id, hour from touched_hour)`,
      })}`,
    );
}

/** Temporary table `span_near_touched_hour`; its size is told to the planner, which would guess it far too small. */
async function findSpansNearTouchedHours({
  tx,
  organisationId,
  siteId,
}: Derivation): Promise<void> {
  await tx.execute(sql`drop table if exists span_near_touched_hour`);
  // A long stay may lie near several touched spans: it is to count once.
  await tx.execute(sql`/* spans near touched hours */
    create temp table span_near_touched_hour on commit drop as
    select distinct on (near.zone_id, near.job_key, near.ordinal, near.inside_from, near.process_from)
      near.*, has_quantities
    from touched_span join told_zone using (zone_id)
    cross join (${lengthReaches}) as length_reach
    cross join lateral (
      select zone_id, job_key, ordinal, inside_from, process_from, until, quantity
      from zone_span
      where organisation_id = ${organisationId} and site_id = ${siteId}
        and zone_id = touched_span.zone_id
        and length_class = class
        and entered < touched_span.hi
        and entered >= touched_span.lo - reach
        and (left_at is null or left_at >= touched_span.lo)
      offset 0
    ) as near`);
  await tx.execute(sql`analyze span_near_touched_hour`);
}
