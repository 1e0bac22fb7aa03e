import { sql } from 'drizzle-orm';
import type { Derivation } from './derivation.ts';
import { lengthClass, stayFrom } from './stay-of-record.ts';

/**
 * Says when the job came where it was in two areas at once: finishes and starts of the pass in order of
 * time. At one instant finishes come first, but records of no length keep their places.
 */
export async function enterOverlapping({ tx, organisationId, siteId }: Derivation): Promise<void> {
  // A job's first record has nothing before it: what it does not tell stays unknown.
  const isOpen = sql`entered is null and arrived is null and ordinal > 1`;
  const { rows } = await tx.execute(sql`/* any overlapping */
    select exists (select from merged_record where ${isOpen}) as overlap`);
  if (rows[0]?.overlap !== true) return;
  await tx.execute(sql`/* enter overlapping */
    with overlapping as (
      select distinct job_key, pass from merged_record where ${isOpen}
    ),
    overlapped as (
      select
        job_key, pass, ordinal, started, left_at,
        coalesce(started, arrived, finished) as about, coalesce(started, finished) as wanted
      from merged_record join overlapping using (job_key, pass)
    ),
    moment as (
      select
        job_key, pass, left_at as at, left_at,
        case when left_at > about then 0 else ordinal end as rank, 1 as turn, null::integer as asks
      from overlapped where left_at is not null
      union all
      select job_key, pass, wanted, null, ordinal, 0, ordinal
      from overlapped where wanted is not null
    ),
    answered as (
      select
        job_key, asks,
        max(left_at) over (
          partition by job_key, pass order by at, rank, turn rows unbounded preceding
        ) as previous_left
      from moment
    ),
    found as (
      select
        merged.job_key, merged.ordinal, counts_from, merged.started, merged.left_at,
        coalesce(previous_left, merged.started) as entered
      from answered
      join merged_record as merged on merged.job_key = answered.job_key and merged.ordinal = asks
      join zone on zone.id = area_id
      where zone.organisation_id = ${organisationId} and zone.site_id = ${siteId}
        and merged.entered is null and merged.arrived is null
    )
    update merged_record as merged
    set entered = found.entered, stay_from = found.stay_from, length_class = found.length_class
    from (
      select
        job_key, ordinal, entered, ${stayFrom} as stay_from, ${lengthClass} as length_class
      from found
    ) as found
    where merged.job_key = found.job_key and merged.ordinal = found.ordinal`);
}
