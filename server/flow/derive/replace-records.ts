import { sql } from 'drizzle-orm';
import type { Derivation } from './derivation.ts';

/**
 * Temporary table `changed_job`: the touched jobs whose merged records differ from those that stand.
 * Needs `merged_record`.
 */
export async function findChangedJobs(derivation: Derivation): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  await tx.execute(sql`drop table if exists changed_job`);
  if (!(await anyStands(derivation))) {
    await tx.execute(
      sql`create temp table changed_job on commit drop as select job_key from touched_job`,
    );
    await finishChangedJobs(tx);
    return;
  }
  await tx.execute(sql`/* changed jobs */
    create temp table changed_job on commit drop as
    with merged as (
      select
        job_key, ordinal, area_id, pass, arrived, started, finished,
        record_key, quantity, family, due, priority, work_content, value, resource, status, ending, parent,
        upload_id, line, part,
        entered, left_at, finish_inferred, stay_from, length_class
      from merged_record
    ),
    standing as (
      select
        job_key, ordinal, area_id, pass, arrived, started, finished,
        record_key, quantity, family, due, priority, work_content, value, resource, status, ending, parent,
        upload_id, line, part,
        entered, left_at, finish_inferred, stay_from, length_class
      from record join touched_job using (job_key)
      where organisation_id = ${organisationId} and site_id = ${siteId}
    )
    select distinct coalesce(merged.job_key, standing.job_key) as job_key
    from merged full join standing
      on standing.job_key = merged.job_key and standing.ordinal = merged.ordinal
    where merged.* is distinct from standing.*`);
  await finishChangedJobs(tx);
}

async function finishChangedJobs(tx: Derivation['tx']): Promise<void> {
  await tx.execute(sql`alter table changed_job add primary key (job_key)`);
  await tx.execute(sql`analyze changed_job`);
}

/** Whether any of the touched jobs has a record: of new jobs none has, and there is nothing to compare. */
async function anyStands({ tx, organisationId, siteId }: Derivation): Promise<boolean> {
  const { rows } = await tx.execute(sql`/* any record of a touched job */
    select exists (
      select from touched_job join record using (job_key)
      where organisation_id = ${organisationId} and site_id = ${siteId}
    ) as stands`);
  return rows[0]?.stands === true;
}

/**
 * Puts the merged records of the changed jobs in the place of those that stand. They come in order of their
 * key, as they were merged.
 */
export async function replaceRecords({ tx, organisationId, siteId }: Derivation): Promise<void> {
  await tx.execute(sql`/* remove changed records */
    delete from record using changed_job
    where organisation_id = ${organisationId} and site_id = ${siteId}
      and record.job_key = changed_job.job_key`);
  await tx.execute(sql`/* insert changed records */
    insert into record (
      organisation_id, site_id,
      job_key, ordinal, area_id, pass, arrived, started, finished,
      record_key, quantity, family, due, priority, work_content, value, resource, status, ending, parent,
      upload_id, line, part,
      entered, left_at, finish_inferred, stay_from, length_class
    )
    select
      ${organisationId}, ${siteId},
      job_key, ordinal, area_id, pass, arrived, started, finished,
      record_key, quantity, family, due, priority, work_content, value, resource, status, ending, parent,
      upload_id, line, part,
      entered, left_at, finish_inferred, stay_from, length_class
    from merged_record
    where job_key in (select job_key from changed_job)`);
}
