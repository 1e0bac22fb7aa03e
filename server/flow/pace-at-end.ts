import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { dayMs, hourMs } from '../../shared/local-time.ts';
import type { PaceAtEnd } from '../methods/finish-filter.ts';
import { instantValue } from './instant-value.ts';
import type { SiteReader } from './zone-reader.ts';

const weeksBefore = 4;
const weekMs = 7 * dayMs;
const mostStay = 4 * weekMs;
const leastStay = 4 * hourMs;

const paceRow = z.object({
  open: z.coerce.number(),
  inside_before: z.coerce.number(),
  departures: z.array(z.coerce.number()),
});

/**
 * How fast jobs left the site over the last length of a stay (the 95th percentile, four hours at least and
 * four weeks at most) and over the last quarter of it, and in the same hours before; by whole hours. Null
 * where the data do not reach back so far.
 */
export async function readPaceAtEnd(
  { tx, organisationId, siteId }: SiteReader,
  span: { first: number; latest: number },
): Promise<PaceAtEnd | null> {
  const stay = await readLongStay({ tx, organisationId, siteId });
  const length = Math.min(mostStay, Math.max(leastStay, stay));
  const shift = Math.ceil(length / weekMs) * weekMs;
  if (span.first > span.latest - length - weeksBefore * shift) return null;
  const ends = Array.from({ length: weeksBefore + 1 }, (_, index) => span.latest - index * shift);
  const windows = [
    ...ends.map((to) => ({ to, from: to - length })),
    ...ends.map((to) => ({ to, from: to - length / 4 })),
  ];
  const { rows } = await tx.execute(sql`/* pace at the end of the data */
    with hourly as (
      select hour, ups, downs
      from level_hour join zone
        on zone.organisation_id = level_hour.organisation_id
        and zone.site_id = level_hour.site_id
        and zone.id = level_hour.zone_id
      where level_hour.organisation_id = ${organisationId} and level_hour.site_id = ${siteId}
        and zone.kind = 'site' and measure = 'inside_jobs'
    ),
    looked_at as (
      select * from unnest(
        ${sql.param(windows.map(({ from }) => instantValue(from)))}::timestamptz[],
        ${sql.param(windows.map(({ to }) => instantValue(to)))}::timestamptz[]
      ) with ordinality as looked (starts, ends, place)
    ),
    left_within as (
      select place, coalesce(sum(downs), 0) as departures
      from looked_at left join hourly on hour > starts and hour <= ends
      group by place
    )
    select
      (select coalesce(sum(ups - downs), 0) from hourly) as open,
      (
        select coalesce(sum(ups - downs), 0) from hourly
        where hour <= ${instantValue(span.latest - length)}::timestamptz
      ) as inside_before,
      (select array_agg(departures::double precision order by place) from left_within) as departures`);
  const { open, inside_before, departures } = paceRow.parse(rows[0]);
  const [whole, latest] = [departures.slice(0, ends.length), departures.slice(ends.length)];
  return {
    open,
    insideBefore: inside_before,
    departures: whole[0] ?? 0,
    latestDepartures: latest[0] ?? 0,
    usualDepartures: whole.slice(1),
    usualLatestDepartures: latest.slice(1),
  };
}

/** 95th percentile of the site's flow time, in milliseconds: the zone knows it as the length of its warm-up. */
async function readLongStay({
  tx,
  organisationId,
  siteId,
}: Pick<SiteReader, 'tx' | 'organisationId' | 'siteId'>): Promise<number> {
  const { rows } = await tx.execute(sql`/* long stay on the site */
    select coalesce(extract(epoch from warm_until - data_from), 0)::double precision as seconds
    from zone
    where organisation_id = ${organisationId} and site_id = ${siteId} and kind = 'site'`);
  return z.object({ seconds: z.number() }).parse(rows[0]).seconds * 1000;
}
