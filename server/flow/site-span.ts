import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { lengthReaches } from './length-reach.ts';
import type { Period, SiteReader } from './zone-reader.ts';

/** A stretch of so many days in which nothing happened anywhere is told as a gap, not as a weekend. */
const gapDays = 3;
/** Waiting times of so many days before the data end say how long a start may be outstanding. */
const waitingDays = 7;

export interface SiteSpan {
  gaps: Period[];
  /** From here on later exports may still change the figures; null where nothing is outstanding. */
  settlingFrom: number | null;
  /** The latest moment for which any area's data speak. */
  latest: number | null;
}

/** What the loaded span of a site looks like: where data are missing, and where they still settle. */
export async function readSiteSpan(reader: SiteReader): Promise<SiteSpan> {
  const settling = await readSettling(reader);
  return { gaps: await readGaps(reader), ...settling };
}

const gapRow = z.object({ gap_from: z.coerce.date(), gap_to: z.coerce.date() });

async function readGaps({ tx, organisationId, siteId }: SiteReader): Promise<Period[]> {
  const { rows } = await tx.execute(sql`/* gaps of a site */
    with worked as (
      select starts, lag(ends) over (order by day) as gap_from
      from level_day join zone
        on zone.organisation_id = level_day.organisation_id
        and zone.site_id = level_day.site_id
        and zone.id = level_day.zone_id
      where level_day.organisation_id = ${organisationId} and level_day.site_id = ${siteId}
        and zone.kind = 'site' and measure = 'inside_jobs'
    )
    select gap_from, starts as gap_to from worked
    where starts - gap_from >= make_interval(days => ${gapDays}::integer)
    order by gap_from`);
  return z
    .array(gapRow)
    .parse(rows)
    .map((row) => ({ from: row.gap_from.getTime(), to: row.gap_to.getTime() }));
}

const settlingRow = z.object({
  settling_from: z.coerce.date().nullable(),
  latest: z.coerce.date().nullable(),
});

/**
 * Figures settle from the first moment on for which an area in use does not speak yet; where its arrivals
 * are inferred from later starts, from the 95th percentile of its waiting time before that moment.
 */
async function readSettling({
  tx,
  organisationId,
  siteId,
}: SiteReader): Promise<Pick<SiteSpan, 'settlingFrom' | 'latest'>> {
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  const { rows } = await tx.execute(sql`/* settling span of a site */
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
    select
      min(data_until - make_interval(secs => coalesce(waiting_seconds, 0)::double precision))
        as settling_from,
      max(latest) as latest
    from in_use left join waited using (zone_id)`);
  const { settling_from, latest } = settlingRow.parse(rows[0]);
  const from = settling_from?.getTime() ?? null;
  const end = latest?.getTime() ?? null;
  return { settlingFrom: from !== null && end !== null && from < end ? from : null, latest: end };
}
