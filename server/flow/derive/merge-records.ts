import { sql } from 'drizzle-orm';
import type { Derivation } from './derivation.ts';
import { enterOverlapping } from './enter-overlapping.ts';
import { lengthClass, stayFrom } from './stay-of-record.ts';
import { keyedRows } from './told-rows.ts';

/**
 * Temporary table `merged_record`: the records of the touched jobs as they now stand, in the columns of
 * `record`, and whether each overlaps an earlier one of the job. Of each field the last given value holds,
 * so a given value beats a blank in any order. Needs `told_row`.
 */
export async function mergeRecords(derivation: Derivation): Promise<void> {
  await foldVersions(derivation);
  await chainRecords(derivation);
  await enterOverlapping(derivation);
  await derivation.tx.execute(sql`analyze merged_record`);
}

/** Temporary table `folded_record`: one row for all rows that tell of the same record, where there are several. */
async function foldVersions({ tx }: Derivation): Promise<void> {
  await tx.execute(sql`drop table if exists folded_record`);
  await tx.execute(sql`/* fold versions */
    create temp table folded_record on commit drop as
    with in_order as (
      select * from told_row
      order by first_upload, first_line, first_part, version
    ),
    last_given as (
      -- The rows come in order, so the last element of each array is the last value given.
      select
        first_upload, first_line, first_part,
        array_agg(job_key) as job_key,
        array_agg(area_id) as area_id,
        array_agg(arrived) filter (where arrived is not null) as arrived,
        array_agg(started) filter (where started is not null) as started,
        array_agg(finished) filter (where finished is not null) as finished,
        array_agg(record_key) filter (where record_key is not null) as record_key,
        array_agg(quantity) filter (where quantity is not null) as quantity,
        array_agg(family) filter (where family is not null) as family,
        array_agg(due) filter (where due is not null) as due,
        array_agg(priority) filter (where priority is not null) as priority,
        array_agg(work_content) filter (where work_content is not null) as work_content,
        array_agg(value) filter (where value is not null) as value,
        array_agg(resource) filter (where resource is not null) as resource,
        array_agg(status) filter (where status is not null) as status,
        array_agg(ending) filter (where ending is not null) as ending,
        array_agg(parent) filter (where parent is not null) as parent
      from in_order group by first_upload, first_line, first_part
    ),
    folded as (
      select
        first_upload, first_line, first_part,
        job_key[array_upper(job_key, 1)] as job_key,
        area_id[array_upper(area_id, 1)] as area_id,
        arrived[array_upper(arrived, 1)] as arrived,
        started[array_upper(started, 1)] as started,
        finished[array_upper(finished, 1)] as finished,
        record_key[array_upper(record_key, 1)] as record_key,
        quantity[array_upper(quantity, 1)] as quantity,
        family[array_upper(family, 1)] as family,
        due[array_upper(due, 1)] as due,
        priority[array_upper(priority, 1)] as priority,
        work_content[array_upper(work_content, 1)] as work_content,
        value[array_upper(value, 1)] as value,
        resource[array_upper(resource, 1)] as resource,
        status[array_upper(status, 1)] as status,
        ending[array_upper(ending, 1)] as ending,
        parent[array_upper(parent, 1)] as parent
      from last_given
    ),
    source as (
      -- The first row that tells it as it now stands, else the last row that told of it.
      select distinct on (told.first_upload, told.first_line, told.first_part)
        told.first_upload, told.first_line, told.first_part,
        told.upload_id, told.line, told.part
      from in_order as told join folded using (first_upload, first_line, first_part)
      order by
        told.first_upload, told.first_line, told.first_part,
        (
          (told.arrived, told.started, told.finished)
            is distinct from (folded.arrived, folded.started, folded.finished)
        ),
        case
          when (told.arrived, told.started, told.finished)
            is distinct from (folded.arrived, folded.started, folded.finished)
          then -told.version else told.version
        end
    )
    select
      job_key, area_id, arrived, started, finished,
      record_key, quantity, family, due, priority, work_content, value, resource, status, ending, parent,
      upload_id, line, part
    from folded join source using (first_upload, first_line, first_part)`);
}

/**
 * Adds to each record what follows from the job's other records: its place, its pass, a lost finish
 * taken from a later start, and when the job came: its arrival, else its latest finish anywhere that is
 * not after this start, else this start. Where the job was elsewhere at that time, `entered` is left open
 * for `enterOverlapping`.
 *
 * Windows share one frame, and none begins at the current row: a minimum over what follows would be
 * sought anew for every row, so it is taken from the other end.
 */
async function chainRecords(derivation: Derivation): Promise<void> {
  const { tx, inferLostFinish, newPassAfterDays } = derivation;
  await tx.execute(sql`drop table if exists merged_record`);
  await tx.execute(sql`/* chain records */
    create temp table merged_record on commit drop as
    with ${keyedRows(derivation)},
    every_record as (
      select
        job_key, area_id, arrived, started, finished,
        record_key, quantity, family, due, priority, work_content, value, resource, status, ending, parent,
        upload_id, line, part
      from keyed
      where not exists (
        select from retold
        where retold.job_key = keyed.job_key
          and retold.area_id = keyed.area_id
          and retold.about = keyed.about
          and keyed.record_key is null
      )
      and not exists (select from retold where retold.record_key = keyed.record_key)
      union all
      select * from folded_record
    ),
    placed as (
      select *, coalesce(started, arrived, finished) as about from every_record
    ),
    ended as (
      select
        *,
        coalesce(
          finished,
          -- A stay that ended otherwise, at no time that is told, ended at the latest that is known of it.
          case when ending is not null then coalesce(started, arrived) end,
          case when ${inferLostFinish}::boolean then min(started) over (
            partition by job_key order by about desc
            groups between unbounded preceding and 1 preceding
          ) end
        ) as left_at
      from placed
    ),
    judged as (
      select
        *,
        finished is null and left_at is not null as finish_inferred,
        coalesce(started, finished) as wanted,
        (row_number() over before)::integer as ordinal,
        coalesce(
          least(arrived, started, finished) - max(greatest(arrived, started, finished)) over before
            > make_interval(days => ${newPassAfterDays}::integer),
          false
        ) as returns
      from ended
      window before as (
        partition by job_key order by about, finished, upload_id, line, part
        rows between unbounded preceding and 1 preceding
      )
    ),
    followed as (
      select
        *,
        (1 + returns::integer + count(*) filter (where returns) over before)::integer as pass,
        case when returns then about else max(case when returns then about end) over before end
          as pass_began,
        max(left_at) over before as latest_left_ever
      from judged
      window before as (
        partition by job_key order by about, finished, upload_id, line, part
        rows between unbounded preceding and 1 preceding
      )
    ),
    in_pass as (
      -- What left before the pass began belongs to an earlier one.
      select
        *,
        case
          when pass_began is null or latest_left_ever >= pass_began then latest_left_ever
        end as latest_left
      from followed
    ),
    met as (
      select
        *,
        coalesce(arrived, case when latest_left > wanted then null else coalesce(latest_left, started) end)
          as entered,
        coalesce(latest_left > started, false) as overlapping
      from in_pass
    )
    select
      job_key, ordinal, area_id, pass, arrived, started, finished,
      record_key, quantity, family, due, priority, work_content, value, resource, status, ending, parent,
      upload_id, line, part,
      entered, left_at, finish_inferred,
      ${stayFrom} as stay_from, ${lengthClass} as length_class, overlapping
    from met join zone on zone.id = area_id
    where zone.organisation_id = ${derivation.organisationId} and zone.site_id = ${derivation.siteId}`);
}
