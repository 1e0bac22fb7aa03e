import { sql, type SQL } from 'drizzle-orm';
import { binRatio, zeroBin } from '../../methods/binned-percentile.ts';
import { instantValue } from '../instant-value.ts';
import { lengthReaches } from '../length-reach.ts';
import type { Derivation } from './derivation.ts';
import { dayGridRow, type DayGrid } from './local-grid.ts';

const summed = ({ organisationId, siteId }: Derivation, departures: SQL, grid: DayGrid): SQL => sql`
  insert into flow_day (
    organisation_id, site_id, zone_id, day, starts, departures, flow_microseconds,
    queue_known, queue_microseconds, process_known, process_microseconds, bins, counts
  )
  with grid as (${dayGridRow(grid)}),
  departure as (${departures}),
  binned as (
    select
      zone_id, width_bucket(left_at, (select borders from grid)) as place,
      case when left_at = entered then ${zeroBin}::integer
        else floor(ln(date_part('epoch', left_at - entered)) / ln(${binRatio}::double precision))::integer
      end as bin,
      count(*) as departures,
      sum(microseconds(left_at - entered)) as flow_microseconds,
      count(queue_microseconds) as queue_known,
      coalesce(sum(queue_microseconds), 0) as queue_microseconds,
      count(process_microseconds) as process_known,
      coalesce(sum(process_microseconds), 0) as process_microseconds
    from departure
    group by 1, 2, 3
  )
  select
    ${organisationId}, ${siteId}, zone_id, (select days from grid)[place], (select borders from grid)[place],
    sum(departures), sum(flow_microseconds), sum(queue_known), sum(queue_microseconds),
    sum(process_known), sum(process_microseconds),
    array_agg(bin order by bin), array_agg(departures::integer order by bin)
  from binned
  group by zone_id, place`;

/** Derives the departures of every day of the given zones afresh, from the day that begins at `from` on. */
export async function replaceFlowDays(
  derivation: Derivation,
  zoneIds: readonly number[],
  grid: DayGrid,
  from: number,
): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  const begins = sql`${instantValue(from)}::timestamptz`;
  const ofZones = sql`organisation_id = ${organisationId} and site_id = ${siteId}
    and zone_id = any(${sql.param(zoneIds)}::integer[])`;
  await tx.execute(sql`/* remove flow days */
    delete from flow_day where ${ofZones} and starts >= ${begins}`);
  await tx.execute(
    sql`/* insert flow days */ ${summed(
      derivation,
      sql`select * from zone_stay where ${ofZones} and left_at is not null and left_at >= ${begins}`,
      grid,
    )}`,
  );
}

/** Derives the departures of the days named in `touched_day` (zone_id, starts, ends) afresh. */
export async function replaceTouchedFlowDays(derivation: Derivation, grid: DayGrid): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  await tx.execute(sql`/* remove touched flow days */
    delete from flow_day using touched_day
    where organisation_id = ${organisationId} and site_id = ${siteId}
      and flow_day.zone_id = touched_day.zone_id and flow_day.starts = touched_day.starts`);
  await tx.execute(
    sql`/* insert touched flow days */ ${summed(
      derivation,
      sql`
      select found.*
      from touched_day
      cross join (${lengthReaches}) as length_reach
      cross join lateral (
        select * from zone_stay
        where organisation_id = ${organisationId} and site_id = ${siteId}
          and zone_id = touched_day.zone_id
          and length_class = class and class <> 99
          and entered < touched_day.ends and entered >= touched_day.starts - reach
          and left_at >= touched_day.starts and left_at < touched_day.ends
        offset 0
      ) as found`,
      grid,
    )}`,
  );
}
