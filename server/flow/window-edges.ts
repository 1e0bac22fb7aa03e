import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { instantValue } from './instant-value.ts';
import { lengthReaches } from './length-reach.ts';
import type { Period, SiteReader } from './zone-reader.ts';

const numeric = z.coerce.number();
const edgesRow = z.object({
  arrivals: numeric,
  departures: numeric,
  flow_sum: numeric,
  before_sum: numeric,
  still_inside_sum: numeric,
  still_inside: numeric,
  units_still_inside: numeric,
  age_sum: numeric,
  oldest: z.coerce.number().nullable(),
});

/** What stays say of a window [s, e), in jobs and seconds: one of the two routes of Little's Law. */
export interface WindowEdges {
  arrivals: number;
  departures: number;
  /** Σ (d − a) over stays that left in the window. */
  flowSum: number;
  /** Σ (s − a) over stays that left in the window and entered before it. */
  beforeSum: number;
  /** Σ (e − max(a, s)) over stays entered before e and not left before e. */
  stillInsideSum: number;
  stillInside: number;
  /** Units of these; a job without a quantity is one. */
  unitsStillInside: number;
  /** Σ and greatest (e − a) over the same. */
  ageSum: number;
  oldest: number | null;
}

/** The edges of a window from the stays alone; the levels have no part in it. */
export async function readWindowEdges(
  { tx, organisationId, siteId }: SiteReader,
  zoneId: number,
  period: Period,
): Promise<WindowEdges> {
  const from = sql`${instantValue(period.from)}::timestamptz`;
  const to = sql`${instantValue(period.to)}::timestamptz`;
  const { rows } = await tx.execute(sql`/* window edges */
    with met as (
      select
        entered, left_at, quantity,
        left_at is null or left_at >= ${to} as still_inside,
        coalesce(left_at >= ${from} and left_at < ${to}, false) as departs
      from (${lengthReaches}) as length_reach
      cross join lateral (
        select entered, left_at, quantity from zone_stay
        where organisation_id = ${organisationId} and site_id = ${siteId} and zone_id = ${zoneId}
          and length_class = class
          and entered < ${to} and entered >= ${from} - reach
          and (left_at is null or left_at >= ${from})
        offset 0
      ) as found
    )
    select
      count(*) filter (where entered >= ${from}) as arrivals,
      count(*) filter (where departs) as departures,
      coalesce(sum(extract(epoch from left_at - entered)) filter (where departs), 0) as flow_sum,
      coalesce(
        sum(extract(epoch from ${from} - entered)) filter (where departs and entered < ${from}), 0
      ) as before_sum,
      coalesce(
        sum(extract(epoch from ${to} - greatest(entered, ${from}))) filter (where still_inside), 0
      ) as still_inside_sum,
      count(*) filter (where still_inside) as still_inside,
      coalesce(sum(coalesce(quantity, 1)) filter (where still_inside), 0) as units_still_inside,
      coalesce(sum(extract(epoch from ${to} - entered)) filter (where still_inside), 0) as age_sum,
      max(extract(epoch from ${to} - entered)) filter (where still_inside) as oldest
    from met`);
  const row = edgesRow.parse(rows[0]);
  return {
    arrivals: row.arrivals,
    departures: row.departures,
    flowSum: row.flow_sum,
    beforeSum: row.before_sum,
    stillInsideSum: row.still_inside_sum,
    stillInside: row.still_inside,
    unitsStillInside: row.units_still_inside,
    ageSum: row.age_sum,
    oldest: row.oldest,
  };
}
