import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { lengthReaches } from './length-reach.ts';
import type { SiteReader } from './zone-reader.ts';

/** So many of the latest jobs say in which order areas are visited. */
const jobsAsked = 2000;

/** How an area lies in the ways of jobs. */
export interface AreaOnWay {
  areaId: number;
  /** Mean place of its first visit in a job's way, from 0 (first) to 1 (last); null where no job shows it. */
  place: number | null;
  jobs: number;
  /** Of these jobs, how many visit the areas named by id too. */
  alsoVisit: Record<string, number>;
}

const wayRow = z.object({
  area_id: z.number(),
  place: z.coerce.number().nullable(),
  jobs: z.coerce.number(),
  also_visit: z.record(z.string(), z.number()),
});

/** Where the areas of a site lie in the ways of its latest jobs, by first visits within a pass. */
export async function readAreasOnWay({
  tx,
  organisationId,
  siteId,
}: SiteReader): Promise<AreaOnWay[]> {
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  const { rows } = await tx.execute(sql`/* areas on the way */
    with latest as (
      select found.job_key, found.entered
      from zone
      cross join (${lengthReaches}) as length_reach
      cross join lateral (
        select job_key, entered from stay
        where ${ofSite} and zone_id = zone.id and length_class = class
        order by entered desc
        limit ${jobsAsked}
      ) as found
      where zone.organisation_id = ${organisationId} and zone.site_id = ${siteId}
        and zone.kind = 'site'
      order by found.entered desc
      limit ${jobsAsked}
    ),
    visit as (
      select job_key, pass, area_id, min(ordinal) as ordinal
      from record
      where ${ofSite} and job_key in (select job_key from latest)
      group by job_key, pass, area_id
    ),
    placed as (
      select
        visit.*,
        (rank() over way - 1)::double precision
          / nullif(count(*) over (partition by job_key, pass) - 1, 0) as place
      from visit
      window way as (partition by job_key, pass order by ordinal)
    ),
    pair as (
      select one.area_id, other.area_id as other_id, count(*) as jobs
      from visit as one join visit as other using (job_key, pass)
      where one.area_id <> other.area_id
      group by one.area_id, other.area_id
    )
    select
      area.id as area_id,
      (select avg(place) from placed where placed.area_id = area.id) as place,
      (select count(*) from placed where placed.area_id = area.id) as jobs,
      coalesce(
        (select jsonb_object_agg(other_id, pair.jobs) from pair where pair.area_id = area.id),
        '{}'
      ) as also_visit
    from area where ${ofSite}
    order by area.position, area.id`);
  return z
    .array(wayRow)
    .parse(rows)
    .map((row) => ({
      areaId: row.area_id,
      place: row.place,
      jobs: row.jobs,
      alsoVisit: row.also_visit,
    }));
}
