import { sql, type SQL } from 'drizzle-orm';
import type { Derivation } from './derivation.ts';

/**
 * Derives the stays in zones of several areas: a job's consecutive records inside the zone are one stay
 * (gaps and islands). Entered is their least, left their greatest; process time is the union of their
 * process intervals, unknown where any of them is; an inferred finish gives no process interval.
 *
 * @param jobs statement that gives the `job_key`s to derive afresh; their standing stays go
 * @param onlyZone one zone, or null for every zone of several areas
 */
export async function replaceStays(
  derivation: Derivation,
  jobs: SQL,
  onlyZone: number | null = null,
): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  await tx.execute(sql`/* remove stays */
    delete from stay
    where organisation_id = ${organisationId} and site_id = ${siteId}
      and job_key in (${jobs})
      and (${onlyZone}::integer is null or zone_id = ${onlyZone}::integer)`);
  const records = sql`
    record join zone
      on zone.organisation_id = record.organisation_id and zone.site_id = record.site_id`;
  const asked = sql`
    record.organisation_id = ${organisationId} and record.site_id = ${siteId}
    and record.job_key in (${jobs}) and record.entered is not null
    and (${onlyZone}::integer is null or zone.id = ${onlyZone}::integer)`;
  for (const islands of [islandsOfSite, islandsOfLoops])
    await insertStays(derivation, islands(records, asked));
}

const columns = sql`
  zone.id as zone_id, record.job_key, record.ordinal, record.pass, record.started, record.left_at,
  record.finish_inferred, record.ending, record.quantity, record.upload_id, record.line,
  case zone.counts_from when 'start' then record.started else record.entered end as counted_from`;

/** The records of jobs in the whole site: within a pass a job does not leave it. */
const islandsOfSite = (records: SQL, asked: SQL): SQL => sql`
  select ${columns}, 0 as gaps from ${records} where ${asked} and zone.kind = 'site'`;

/** The records of jobs inside loops; `gaps` counts the job's records outside before each. */
const islandsOfLoops = (records: SQL, asked: SQL): SQL => sql`
  select * from (
    select
      ${columns}, zone_area.area_id is not null as inside,
      count(*) filter (where zone_area.area_id is null) over (
        partition by zone.id, record.job_key order by record.ordinal rows unbounded preceding
      ) as gaps
    from ${records}
    left join zone_area
      on zone_area.organisation_id = zone.organisation_id
      and zone_area.site_id = zone.site_id
      and zone_area.zone_id = zone.id
      and zone_area.area_id = record.area_id
    where ${asked} and zone.kind = 'loop'
  ) as seen
  where inside`;

/** Makes one stay of each island. Its records come in order, so the last of an array is the latest. */
async function insertStays(
  { tx, organisationId, siteId }: Derivation,
  islands: SQL,
): Promise<void> {
  await tx.execute(sql`/* insert stays */
    insert into stay (
      organisation_id, site_id, job_key, zone_id, ordinal,
      entered, started, left_at, length_class, process_microseconds, process_from, process_to,
      quantity, finish_inferred, ending, upload_id, line
    )
    with island as (${islands}),
    swept as (
      select
        *,
        case when started is not null and not finish_inferred then
          greatest(started, max(
            case when started is not null and not finish_inferred
              then coalesce(left_at, 'infinity')
            end
          ) over (
            partition by zone_id, job_key, pass, gaps order by ordinal
            rows between unbounded preceding and 1 preceding
          ))
        end as process_from
      from island
    ),
    stretch as (
      select *, process_from < coalesce(left_at, 'infinity') as processes from swept
    ),
    whole as (
      select
        zone_id, job_key, pass, gaps,
        min(counted_from) as entered,
        min(started) as started,
        case when bool_and(left_at is not null) then max(left_at) end as left_at,
        case when bool_and(started is not null and left_at is not null and not finish_inferred) then
          coalesce(sum(microseconds(left_at - process_from)) filter (where processes), 0)
        end as process_microseconds,
        coalesce(array_agg(process_from) filter (where processes), '{}') as process_from,
        coalesce(array_agg(left_at) filter (where processes), '{}') as process_to,
        (array_agg(quantity) filter (where quantity is not null))[count(quantity)] as quantity,
        -- Where no recorded finish is as late.
        bool_and(left_at is not null) and coalesce(
          max(left_at) filter (where finish_inferred)
            > coalesce(max(left_at) filter (where not finish_inferred), '-infinity'),
          false
        ) as finish_inferred,
        (array_agg(ending))[count(*)] as ending,
        (array_agg(upload_id))[count(*)] as upload_id,
        (array_agg(line))[count(*)] as line
      from stretch
      group by zone_id, job_key, pass, gaps
    )
    select
      ${organisationId}, ${siteId}, job_key, zone_id,
      row_number() over (partition by zone_id, job_key order by pass, gaps),
      entered, started, left_at, length_class(entered, left_at),
      process_microseconds, process_from, process_to,
      quantity, finish_inferred, ending, upload_id, line
    from whole
    where entered is not null`);
}
