import { sql } from 'drizzle-orm';
import type { Derivation } from './derivation.ts';

/** Gathers in temporary table `touched_job` every job of the site, for a rebuild. */
export async function touchEveryJob({ tx, organisationId, siteId }: Derivation): Promise<void> {
  await createTouchedJobs(tx);
  await tx.execute(sql`/* touch every job */
    insert into touched_job
    select distinct job_key from upload_row
    where organisation_id = ${organisationId} and site_id = ${siteId}
    union
    select distinct job_key from record
    where organisation_id = ${organisationId} and site_id = ${siteId}`);
  await tx.execute(sql`analyze touched_job`);
}

/** An empty `touched_job`: the jobs whose records are to be merged afresh. Lives as long as the transaction. */
export async function createTouchedJobs(tx: Derivation['tx']): Promise<void> {
  await tx.execute(sql`drop table if exists touched_job`);
  await tx.execute(
    sql`create temp table touched_job (job_key text collate "C" primary key) on commit drop`,
  );
}

/**
 * Temporary table `told_row`: every row ever told of the touched jobs, with the record that it tells of.
 * Rows tell of the same record by their record id where they have one, else by job, area and start
 * (arrival, else finish, where there is none). A row that knows only the arrival belongs to the record
 * that began there. A record is named by its first row; `version` counts its rows in order of receipt.
 */
export async function gatherToldRows({ tx, organisationId, siteId }: Derivation): Promise<void> {
  await tx.execute(sql`drop table if exists told_row`);
  await tx.execute(sql`/* told rows */
    create temp table told_row on commit drop as
    with told as (
      select told.*
      from upload_row as told join touched_job using (job_key)
      where organisation_id = ${organisationId} and site_id = ${siteId}
    ),
    keyed as (
      select
        told.*,
        coalesce(
          started,
          case when arrived is not null
            then min(started) over (partition by job_key, area_id, arrived)
          end,
          arrived,
          finished
        ) as about
      from told
    )
    select
      keyed.*,
      row_number() over same_record as version,
      count(*) over (
        same_record rows between unbounded preceding and unbounded following
      ) as versions,
      first_value(upload_id) over same_record as first_upload,
      first_value(line) over same_record as first_line,
      first_value(part) over same_record as first_part
    from keyed where record_key is null
    window same_record as (
      partition by job_key, area_id, about order by upload_id, line, part
    )
    union all
    select
      keyed.*,
      row_number() over same_record,
      count(*) over (
        same_record rows between unbounded preceding and unbounded following
      ),
      first_value(upload_id) over same_record,
      first_value(line) over same_record,
      first_value(part) over same_record
    from keyed where record_key is not null
    window same_record as (partition by record_key order by upload_id, line, part)`);
  await tx.execute(sql`analyze told_row`);
}
