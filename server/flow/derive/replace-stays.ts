import { sql, type SQL } from 'drizzle-orm';
import type { Derivation } from './derivation.ts';

/** Every zone of several areas with the areas it spans. The site spans all that it has. */
export const spannedZones = ({ organisationId, siteId }: Derivation): SQL => sql`
  select zone.id as zone_id, zone.counts_from, area.id as area_id
  from zone join area using (organisation_id, site_id)
  where organisation_id = ${organisationId} and site_id = ${siteId}
    and (
      zone.kind = 'site'
      or zone.kind = 'loop' and exists (
        select from zone_area
        where zone_area.organisation_id = zone.organisation_id
          and zone_area.site_id = zone.site_id
          and zone_area.zone_id = zone.id
          and zone_area.area_id = area.id
      )
    )`;

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
  await tx.execute(sql`/* insert stays */
    insert into stay (
      organisation_id, site_id, job_key, zone_id, ordinal,
      entered, started, left_at, length_class, process_microseconds, process_from, process_to,
      quantity, finish_inferred, upload_id, line
    )
    with spanned as (${spannedZones(derivation)}),
    spanning as (
      select zone_id, counts_from from spanned
      where ${onlyZone}::integer is null or zone_id = ${onlyZone}::integer
      group by zone_id, counts_from
    ),
    seen as (
      select
        record.job_key, record.ordinal, record.pass, record.entered, record.started,
        record.left_at, record.finish_inferred, record.quantity, record.upload_id, record.line,
        spanning.zone_id, spanning.counts_from, spanned.area_id is not null as inside
      from record
      cross join spanning
      left join spanned
        on spanned.zone_id = spanning.zone_id and spanned.area_id = record.area_id
      where record.organisation_id = ${organisationId} and record.site_id = ${siteId}
        and record.job_key in (${jobs})
        and record.entered is not null
    ),
    island as (
      select
        *,
        count(*) filter (where not inside) over (
          partition by zone_id, job_key order by ordinal rows unbounded preceding
        ) as gaps
      from seen
    ),
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
      from island where inside
    ),
    stretch as (
      select *, process_from < coalesce(left_at, 'infinity') as processes from swept
    ),
    whole as (
      select
        job_key, zone_id, counts_from, pass, gaps,
        case counts_from when 'start' then min(started) else min(entered) end as entered,
        min(started) as started,
        case when bool_and(left_at is not null) then max(left_at) end as left_at,
        case when bool_and(started is not null and left_at is not null and not finish_inferred) then
          coalesce(sum(microseconds(left_at - process_from)) filter (where processes), 0)
        end as process_microseconds,
        coalesce(array_agg(process_from order by ordinal) filter (where processes), '{}') as process_from,
        coalesce(array_agg(left_at order by ordinal) filter (where processes), '{}') as process_to,
        (array_agg(quantity order by ordinal desc) filter (where quantity is not null))[1] as quantity,
        (array_agg(finish_inferred order by left_at desc, ordinal desc))[1] as finish_inferred,
        (array_agg(upload_id order by ordinal desc))[1] as upload_id,
        (array_agg(line order by ordinal desc))[1] as line
      from stretch
      group by job_key, zone_id, counts_from, pass, gaps
    )
    select
      ${organisationId}, ${siteId}, job_key, zone_id,
      row_number() over (partition by job_key, zone_id order by pass, gaps),
      entered, started, left_at, length_class(entered, left_at),
      process_microseconds, process_from, process_to,
      quantity, finish_inferred, upload_id, line
    from whole
    where entered is not null`);
}
