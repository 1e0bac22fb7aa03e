import { sql, type SQL } from 'drizzle-orm';
import { z } from 'zod';
import { instantValue } from './instant-value.ts';
import type { SiteReader } from './zone-reader.ts';

/** What one upload is the source of, for one area on one local day. */
export interface TrustCount {
  areaId: number;
  /** Place of the day in the grid, from 0. */
  day: number;
  uploadId: number;
  /** Recorded times: starts (arrivals, where there is none) and finishes. */
  times: number;
  finishes: number;
  onHours: number;
  briefForHours: number;
  onMinutes: number;
  briefForMinutes: number;
  /** Finishes with neither an arrival nor a start. */
  untold: number;
  /** Stays whose finish was inferred, by the day on which they so left. */
  inferred: number;
}

const countRow = z
  .object({
    area_id: z.number(),
    day: z.number(),
    upload_id: z.number(),
    times: z.coerce.number(),
    finishes: z.coerce.number(),
    on_hours: z.coerce.number(),
    brief_for_hours: z.coerce.number(),
    on_minutes: z.coerce.number(),
    brief_for_minutes: z.coerce.number(),
    untold: z.coerce.number(),
    inferred: z.coerce.number(),
  })
  .transform((row): TrustCount => ({
    areaId: row.area_id,
    day: row.day - 1,
    uploadId: row.upload_id,
    times: row.times,
    finishes: row.finishes,
    onHours: row.on_hours,
    briefForHours: row.brief_for_hours,
    onMinutes: row.on_minutes,
    briefForMinutes: row.brief_for_minutes,
    untold: row.untold,
    inferred: row.inferred,
  }));

/** The borders of local days as an array for `width_bucket`. */
export const dayBorders = (borders: readonly number[]): SQL =>
  sql`${sql.param(borders.map(instantValue))}::timestamptz[]`;

/**
 * Counts the records of a site by area, local day and the upload that is their source.
 *
 * @param borders of n local days, n + 1
 */
export async function readTrustCounts(
  { tx, organisationId, siteId }: SiteReader,
  borders: readonly number[],
): Promise<TrustCount[]> {
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  // Local hours begin with the local day, also where the zone is off by a part of an hour.
  const midnight = sql`${instantValue(borders[0] ?? 0)}::timestamptz`;
  const onHour = sql`finished = date_bin('1 hour', finished, ${midnight})`;
  const onMinute = sql`finished = date_bin('1 minute', finished, ${midnight})`;
  const began = sql`coalesce(started, entered)`;
  const { rows } = await tx.execute(sql`/* trust counts */
    with begun as (
      select
        area_id, width_bucket(coalesce(started, arrived), ${dayBorders(borders)}) as day, upload_id,
        count(*) as begins
      from record
      where ${ofSite} and coalesce(started, arrived) is not null
      group by 1, 2, 3
    ),
    ended as (
      select
        area_id, width_bucket(finished, ${dayBorders(borders)}) as day, upload_id,
        count(*) as finishes,
        count(*) filter (where ${onHour}) as on_hours,
        count(*) filter (where ${onHour} and finished < ${began} + interval '2 hours')
          as brief_for_hours,
        count(*) filter (where ${onMinute}) as on_minutes,
        count(*) filter (where ${onMinute} and finished < ${began} + interval '2 minutes')
          as brief_for_minutes,
        count(*) filter (where arrived is null and started is null) as untold
      from record
      where ${ofSite} and finished is not null
      group by 1, 2, 3
    ),
    taken as (
      select
        area_id, width_bucket(left_at, ${dayBorders(borders)}) as day, upload_id,
        count(*) as inferred
      from record
      where ${ofSite} and finish_inferred
      group by 1, 2, 3
    )
    select
      area_id, day, upload_id,
      coalesce(begins, 0) + coalesce(finishes, 0) as times,
      coalesce(finishes, 0) as finishes,
      coalesce(on_hours, 0) as on_hours,
      coalesce(brief_for_hours, 0) as brief_for_hours,
      coalesce(on_minutes, 0) as on_minutes,
      coalesce(brief_for_minutes, 0) as brief_for_minutes,
      coalesce(untold, 0) as untold,
      coalesce(inferred, 0) as inferred
    from begun
    full join ended using (area_id, day, upload_id)
    full join taken using (area_id, day, upload_id)
    where day between 1 and ${borders.length - 1}::integer`);
  return z.array(countRow).parse(rows);
}
