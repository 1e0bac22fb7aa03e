import { sql } from 'drizzle-orm';
import type { Derivation } from './derivation.ts';

/** Makes the departures of whole months from their days, for the months of temporary table `stale_month`. */
export async function replaceFlowMonths({ tx, organisationId, siteId }: Derivation): Promise<void> {
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  await tx.execute(sql`/* remove flow months */
    delete from flow_month using stale_month
    where ${ofSite}
      and flow_month.zone_id = stale_month.zone_id and flow_month.month = stale_month.month`);
  await tx.execute(sql`/* insert flow months */
    insert into flow_month (
      organisation_id, site_id, zone_id, month, departures, flow_microseconds,
      queue_known, queue_microseconds, process_known, process_microseconds, bins, counts
    )
    with of_day as (
      select flow_day.*, stale_month.month
      from flow_day join stale_month
        on stale_month.zone_id = flow_day.zone_id
        and flow_day.day >= stale_month.month
        and flow_day.day < stale_month.month + interval '1 month'
      where ${ofSite}
    ),
    summed as (
      select
        zone_id, month,
        sum(departures) as departures, sum(flow_microseconds) as flow_microseconds,
        sum(queue_known) as queue_known, sum(queue_microseconds) as queue_microseconds,
        sum(process_known) as process_known, sum(process_microseconds) as process_microseconds
      from of_day group by zone_id, month
    ),
    binned as (
      select zone_id, month, bin, sum(departed) as departed
      from of_day cross join unnest(bins, counts) as histogram (bin, departed)
      group by zone_id, month, bin
    ),
    packed as (
      select
        zone_id, month,
        array_agg(bin order by bin) as bins, array_agg(departed::integer order by bin) as counts
      from binned group by zone_id, month
    )
    select
      ${organisationId}, ${siteId}, zone_id, month, departures, flow_microseconds,
      queue_known, queue_microseconds, process_known, process_microseconds, bins, counts
    from summed join packed using (zone_id, month)`);
  await tx.execute(sql`drop table stale_month`);
}

/** Notes in `stale_month` every month of the given zones from a calendar day on, with or without days left. */
export async function markMonthsFrom(
  { tx, organisationId, siteId }: Derivation,
  zoneIds: readonly number[],
  fromDay: string | null,
): Promise<void> {
  const within = sql`organisation_id = ${organisationId} and site_id = ${siteId}
    and zone_id = any(${sql.param([...zoneIds])}::integer[])`;
  const first = sql`date_trunc('month', coalesce(${fromDay}::date, '-infinity'))`;
  await tx.execute(sql`/* stale months */
    create temp table stale_month on commit drop as
    select distinct zone_id, date_trunc('month', day)::date as month
    from flow_day where ${within} and date_trunc('month', day) >= ${first}
    union
    select zone_id, month from flow_month where ${within} and month >= ${first}`);
}

/** Notes in `stale_month` the months of the days in `touched_day`. */
export async function markMonthsOfTouchedDays({ tx }: Derivation): Promise<void> {
  await tx.execute(sql`/* stale months */
    create temp table stale_month on commit drop as
    select distinct zone_id, date_trunc('month', day)::date as month from touched_day`);
}
