import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { stepBorders } from '../../../shared/local-time.ts';
import type { Derivation } from './derivation.ts';
import { dayGridRow, localHour, type DayGrid } from './local-grid.ts';
import { always } from './replace-level-hours.ts';

/** An empty temporary table `touched_hour`: the hours of each zone in which a level changes. */
export async function createTouchedHours({ tx }: Derivation): Promise<void> {
  await tx.execute(sql`drop table if exists touched_hour`);
  await tx.execute(sql`create temp table touched_hour (
    zone_id integer, hour timestamptz, primary key (zone_id, hour)
  ) on commit drop`);
}

/** Notes every hour in which a stay of a changed job, as it stands now, changes a level. */
export async function touchHoursOfChangedJobs(derivation: Derivation): Promise<void> {
  const { tx, rules, organisationId, siteId } = derivation;
  const hour = localHour(rules, always.from, always.to);
  await tx.execute(sql`/* touch hours */
    insert into touched_hour
    with moment as (
      select zone_id, unnest(array[inside_from, process_from, until]) as at
      from changed_job cross join lateral (
        select zone_id, inside_from, process_from, until from zone_span
        where organisation_id = ${organisationId} and site_id = ${siteId}
          and zone_span.job_key = changed_job.job_key
        offset 0
      ) as span
    )
    select distinct zone_id, ${hour.of(sql`at`)}
    from moment ${hour.join}
    where at is not null
    on conflict do nothing`);
}

const spanRow = z.object({
  zone_id: z.number(),
  first_hour: z.coerce.date(),
  touched: z.coerce.number(),
  standing: z.coerce.number(),
});

export interface TouchedZone {
  zoneId: number;
  /** First moment of the first day that has a touched hour. */
  from: number;
  /** Whether so many hours are touched that deriving all from there on costs less. */
  mostly: boolean;
}

/** Which zones have touched hours, from which day on, and how much of each. */
export async function readTouchedZones(derivation: Derivation): Promise<TouchedZone[]> {
  const { tx, rules, organisationId, siteId } = derivation;
  const { rows } = await tx.execute(sql`/* touched zones */
    with touched as (
      select zone_id, min(hour) as first_hour, count(*) as touched from touched_hour group by zone_id
    )
    select
      zone_id, first_hour, touched,
      (
        select count(*) from level_hour
        where organisation_id = ${organisationId} and site_id = ${siteId}
          and level_hour.zone_id = touched.zone_id and measure = 'inside_jobs'
          and hour >= first_hour
      ) as standing
    from touched`);
  return z
    .array(spanRow)
    .parse(rows)
    .map((row) => {
      const first = row.first_hour.getTime();
      return {
        zoneId: row.zone_id,
        from: stepBorders(rules, 'day', first, first + 1)[0] ?? first,
        mostly: row.touched * 2 > row.standing,
      };
    });
}

/** Temporary tables `touched_span`, neighbouring hours together, and `touched_day`. */
export async function spanTouchedHours({ tx }: Derivation, grid: DayGrid): Promise<void> {
  await tx.execute(sql`drop table if exists touched_span, touched_day`);
  await tx.execute(sql`/* touched spans */
    create temp table touched_span on commit drop as
    with stepped as (
      select
        zone_id, hour,
        hour - lag(hour) over (partition by zone_id order by hour) > interval '1 day' as apart
      from touched_hour
    ),
    numbered as (
      select
        zone_id, hour,
        count(*) filter (where apart) over (partition by zone_id order by hour) as number
      from stepped
    )
    select zone_id, min(hour) as lo, max(hour) + interval '2 hours' as hi
    from numbered group by zone_id, number`);
  await tx.execute(sql`analyze touched_hour`);
  await tx.execute(sql`analyze touched_span`);
  await tx.execute(sql`/* touched days */
    create temp table touched_day on commit drop as
    select distinct
      zone_id,
      days[width_bucket(hour, borders)] as day,
      borders[width_bucket(hour, borders)] as starts,
      borders[width_bucket(hour, borders) + 1] as ends
    from touched_hour cross join (${dayGridRow(grid)}) as grid`);
}
