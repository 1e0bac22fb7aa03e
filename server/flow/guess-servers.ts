import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { dayMs } from '../../shared/local-time.ts';
import { instantValue } from './instant-value.ts';
import { lengthReaches } from './length-reach.ts';
import type { SiteReader } from './zone-reader.ts';

const daysAsked = 28;

const serversRow = z.object({ zone_id: z.number(), servers: z.coerce.number() });

/**
 * The number of servers of each area as its jobs show it: the 99th percentile by time of the number in
 * process at once, over the last four weeks of its data, counted while anything is in process. Inferred,
 * never declared. Areas whose log holds no starts are left out.
 *
 * @param until the latest moment for which the site's data speak
 */
export async function readServerGuesses(
  { tx, organisationId, siteId }: SiteReader,
  until: number,
): Promise<Map<number, number>> {
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  const from = sql`${instantValue(until - daysAsked * dayMs)}::timestamptz`;
  const to = sql`${instantValue(until)}::timestamptz`;
  const { rows } = await tx.execute(sql`/* server guesses */
    with process as (
      select zone.id as zone_id, greatest(found.process_from, ${from}) as begins, found.until as ends
      from zone
      cross join (${lengthReaches}) as length_reach
      cross join lateral (
        select process_from, until from zone_span
        where ${ofSite} and zone_id = zone.id and length_class = class
          and entered < ${to} and entered >= ${from} - reach
          and process_from < ${to} and (until is null or until > ${from})
        offset 0
      ) as found
      where zone.organisation_id = ${organisationId} and zone.site_id = ${siteId}
        and zone.kind = 'area' and zone.has_starts
    ),
    change as (
      select zone_id, begins as at, 1 as step from process
      union all
      select zone_id, ends, -1 from process where ends < ${to}
    ),
    running as (
      select
        zone_id, sum(step) over upwards as level,
        lead(at, 1, ${to}) over (partition by zone_id order by at) - at as lasts
      from change
      window upwards as (partition by zone_id order by at)
    ),
    spent as (
      select zone_id, level, sum(lasts) as lasts
      from running where level > 0 group by zone_id, level
    ),
    reached as (
      select
        zone_id, level,
        sum(lasts) over (partition by zone_id order by level) as until_here,
        sum(lasts) over (partition by zone_id) as total
      from spent
    )
    select zone_id, min(level) as servers
    from reached where until_here >= 0.99 * total group by zone_id`);
  return new Map(
    z
      .array(serversRow)
      .parse(rows)
      .map((row) => [row.zone_id, row.servers]),
  );
}
