import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { dayBorders } from './trust-counts.ts';
import type { SiteReader } from './zone-reader.ts';

/** Finishes on the few moments of a day that carry most of them. */
export interface Clumps {
  areaId: number;
  day: number;
  clumped: number;
  clumps: number;
}

/** So many moments at most are looked at: the ends of three shifts. */
const mostMoments = 3;
/** Where three moments carry six in ten, one hour has two in ten at least. */
const suspectShare = 0.2;
const leastFinishes = 10;

const suspectRow = z.object({ zone_id: z.number(), day: z.number() });
const clumpRow = z.object({
  area_id: z.number(),
  day: z.number(),
  clumped: z.coerce.number(),
  clumps: z.coerce.number(),
});

/**
 * Finishes at the same moment, on days on which they could matter: those of which one hour has a large
 * part of the departures. Where there are none, the records are not read.
 */
export async function readClumps(
  reader: SiteReader,
  borders: readonly number[],
): Promise<Clumps[]> {
  const suspects = await readSuspectDays(reader, borders);
  if (suspects.length === 0) return [];
  const { tx, organisationId, siteId } = reader;
  const { rows } = await tx.execute(sql`/* clumps of finishes */
    with suspect as (
      select * from unnest(
        ${sql.param(suspects.map((each) => each.zone_id))}::integer[],
        ${sql.param(suspects.map((each) => each.day))}::integer[]
      ) as suspected (area_id, day)
    ),
    dated as (
      select area_id, started, finished, width_bucket(finished, ${dayBorders(borders)}) as day
      from record
      where organisation_id = ${organisationId} and site_id = ${siteId} and finished is not null
    ),
    moment as (
      -- What started together and ended together is a batch, and no clump.
      select
        area_id, day, count(*) as finishes,
        row_number() over (partition by area_id, day order by count(*) desc) as place
      from dated join suspect using (area_id, day)
      group by area_id, day, finished
      having count(*) > 1
        and not coalesce(
          min(started) = max(started) and count(started) = count(*) and min(started) < finished,
          false
        )
    )
    select area_id, day, sum(finishes) as clumped, count(*) as clumps
    from moment where place <= ${mostMoments}::integer
    group by area_id, day`);
  return z
    .array(clumpRow)
    .parse(rows)
    .map((row) => ({
      areaId: row.area_id,
      day: row.day - 1,
      clumped: row.clumped,
      clumps: row.clumps,
    }));
}

async function readSuspectDays(
  { tx, organisationId, siteId }: SiteReader,
  borders: readonly number[],
): Promise<z.infer<typeof suspectRow>[]> {
  const { rows } = await tx.execute(sql`/* days with many departures in one hour */
    with hourly as (
      select zone_id, width_bucket(hour, ${dayBorders(borders)}) as day, downs
      from level_hour join zone
        on zone.organisation_id = level_hour.organisation_id
        and zone.site_id = level_hour.site_id
        and zone.id = level_hour.zone_id
      where level_hour.organisation_id = ${organisationId} and level_hour.site_id = ${siteId}
        and zone.kind = 'area' and measure = 'inside_jobs' and downs > 0
    )
    select zone_id, day from hourly
    where day between 1 and ${borders.length - 1}::integer
    group by zone_id, day
    having sum(downs) >= ${leastFinishes}::integer
      and max(downs) >= ${suspectShare}::numeric * sum(downs)`);
  return z.array(suspectRow).parse(rows);
}
