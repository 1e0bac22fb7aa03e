import { sql } from 'drizzle-orm';
import { instantValue } from '../instant-value.ts';
import type { Derivation } from './derivation.ts';
import { dayGridRow, type DayGrid } from './local-grid.ts';

/**
 * Makes the days of the given zones from their hours, from one day on: a change of a level shifts every
 * later day's start. The integral is exact: level at the start times the day's true length, plus what
 * each change adds or takes until the day's end.
 *
 * @param from first moment of the first day to make, by zone
 * @param grid local days that cover every hour from there on
 */
export async function replaceLevelDays(
  derivation: Derivation,
  from: ReadonlyMap<number, number>,
  grid: DayGrid,
): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  const starting = sql`
    select * from unnest(
      ${sql.param([...from.keys()])}::integer[],
      ${sql.param([...from.values()].map(instantValue))}::timestamptz[]
    ) as starting (zone_id, begins)`;
  await tx.execute(sql`/* remove level days */
    delete from level_day using (${starting}) as starting
    where organisation_id = ${organisationId} and site_id = ${siteId}
      and level_day.zone_id = starting.zone_id and level_day.starts >= starting.begins`);
  await tx.execute(sql`/* insert level days */
    insert into level_day (
      organisation_id, site_id, zone_id, measure, day, starts, ends,
      level_start, level_end, ups, downs, integral, peak
    )
    with starting as (${starting}),
    grid as (${dayGridRow(grid)}),
    standing as (
      select distinct on (zone_id, measure) zone_id, measure, level_end
      from level_day join starting using (zone_id)
      where organisation_id = ${organisationId} and site_id = ${siteId} and starts < begins
      order by zone_id, measure, starts desc
    ),
    placed as (
      select level_hour.*, width_bucket(hour, (select borders from grid)) as place
      from level_hour join starting using (zone_id)
      where organisation_id = ${organisationId} and site_id = ${siteId} and hour >= begins
    ),
    running as (
      select
        placed.*,
        (select borders from grid)[place + 1] as ends,
        coalesce(level_end, 0) + coalesce(sum(ups - downs) over (
          partition by zone_id, measure order by hour
          rows between unbounded preceding and 1 preceding
        ), 0) as level
      from placed left join standing using (zone_id, measure)
    ),
    by_day as (
      select
        zone_id, measure, place,
        (select days from grid)[place] as day, (select borders from grid)[place] as starts, ends,
        (array_agg(level order by hour))[1] as level_start,
        min(hour) as first_hour,
        sum(ups) as ups, sum(downs) as downs,
        sum(
          (ups - downs) * microseconds(ends - hour)
          - up_offset + down_offset
        ) as gathered,
        max(level + highest) as highest
      from running
      group by zone_id, measure, place, ends
    )
    select
      ${organisationId}, ${siteId}, zone_id, measure, day, starts, ends,
      level_start, level_start + ups - downs, ups, downs,
      level_start * microseconds(ends - starts) + gathered,
      greatest(highest, case when first_hour > starts then level_start end)
    from by_day`);
}
