import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { readWaitingBeforeEnd } from './waiting-before-end.ts';
import type { Period, SiteReader } from './zone-reader.ts';

/** A stretch of so many days in which nothing happened anywhere is told as a gap, not as a weekend. */
const gapDays = 3;

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

/**
 * Figures settle from the first moment on for which an area in use does not speak yet; where its arrivals
 * are inferred from later starts, from the 95th percentile of its waiting time before that moment.
 */
async function readSettling(
  reader: SiteReader,
): Promise<Pick<SiteSpan, 'settlingFrom' | 'latest'>> {
  const areas = await readWaitingBeforeEnd(reader);
  if (areas.length === 0) return { settlingFrom: null, latest: null };
  const latest = Math.max(...areas.map((area) => area.dataUntil));
  const from = Math.min(...areas.map((area) => area.dataUntil - area.waitingSeconds * 1000));
  return { settlingFrom: from < latest ? from : null, latest };
}
