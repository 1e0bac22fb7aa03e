import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { lengthReaches } from './length-reach.ts';
import type { SiteReader } from './zone-reader.ts';

/** Waiting times of so many days before the data end say how long a start may be outstanding. */
const waitingDays = 7;

/** An area in use: up to when its data speak, and how long jobs wait there whose arrival is not recorded. */
export interface WaitingBeforeEnd {
  areaId: number;
  dataUntil: number;
  /** 95th percentile, in seconds; 0 where arrivals are recorded. */
  waitingSeconds: number;
}

const waitingRow = z.object({
  zone_id: z.number(),
  data_until: z.coerce.date(),
  waiting_seconds: z.number(),
});

/**
 * Of each area in use (its data reach into the site's last 28 days), how long its starts may be outstanding:
 * where arrivals are inferred from later starts, jobs that came within this time before the end of the data
 * may not be seen yet.
 */
export async function readWaitingBeforeEnd({
  tx,
  organisationId,
  siteId,
}: SiteReader): Promise<WaitingBeforeEnd[]> {
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  const { rows } = await tx.execute(sql`/* waiting before the end of the data */
    with spoken as (
      select id as zone_id, data_until, max(data_until) over () as latest
      from zone where ${ofSite} and kind = 'area' and data_until is not null
    ),
    in_use as (select * from spoken where data_until >= latest - interval '28 days'),
    waited as (
      select
        in_use.zone_id,
        percentile_cont(0.95) within group (
          order by extract(epoch from found.started - found.stay_from)
        ) as waiting_seconds
      from in_use
      cross join (${lengthReaches}) as length_reach
      cross join lateral (
        select stay_from, started from record
        where ${ofSite} and area_id = in_use.zone_id
          and length_class = class and class <> 99
          and stay_from >= in_use.data_until - make_interval(days => ${waitingDays}::integer) - reach
          and left_at >= in_use.data_until - make_interval(days => ${waitingDays}::integer)
          and arrived is null and started is not null
        offset 0
      ) as found
      group by in_use.zone_id
    )
    select zone_id, data_until, coalesce(waiting_seconds, 0)::double precision as waiting_seconds
    from in_use left join waited using (zone_id)
    order by zone_id`);
  return z
    .array(waitingRow)
    .parse(rows)
    .map((row) => ({
      areaId: row.zone_id,
      dataUntil: row.data_until.getTime(),
      waitingSeconds: row.waiting_seconds,
    }));
}
