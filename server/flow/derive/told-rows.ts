import { sql, type SQL } from 'drizzle-orm';
import { z } from 'zod';
import type { Derivation, ToldKinds, ToldSource } from './derivation.ts';
import { keyedWhereCounted, underOneName } from './moved-rows.ts';
import { pairEvents } from './pair-events.ts';
import { isVoided } from './voided-rows.ts';

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
 * Gathers what was ever told of the touched jobs. Rows tell of the same record by their record id where
 * they have one, else by job, area and start (arrival, else finish, where there is none). A row that knows
 * only the arrival belongs to the record that began there.
 *
 * Most records are told of once. Temporary table `retold` names the others, and `told_row` has all their
 * rows, each record named by its first row, `version` counting its rows in order of receipt; `begun` has
 * the starts by which rows that know only an arrival find their record.
 */
export async function gatherToldRows(derivation: ToldSource): Promise<void> {
  const { tx } = derivation;
  derivation.told = await readToldKinds(derivation);
  await tx.execute(sql`drop table if exists begun, retold, told_row`);
  if (derivation.told.events) await pairEvents(derivation, sql`with ${toldRows(derivation)}`);
  await tx.execute(sql`/* first start told of each arrival */
    create temp table begun on commit drop as
    with ${toldRows(derivation)}
    select job_key, area_id, arrived, min(started) as started
    from told where arrived is not null and started is not null and event is null
    group by job_key, area_id, arrived`);
  await tx.execute(sql`analyze begun`);
  await tx.execute(sql`/* records told of more than once */
    create temp table retold on commit drop as
    with ${keyedRows(derivation)},
    named as (
      select
        case when record_key is null then job_key end as job_key,
        case when record_key is null then area_id end as area_id,
        case when record_key is null then about end as about,
        record_key
      from keyed
    )
    select job_key, area_id, about, record_key
    from named group by job_key, area_id, about, record_key having count(*) > 1`);
  // The planner cannot tell how many rows are told again: with an index either way of joining is fast.
  await tx.execute(sql`create index on retold (job_key, area_id, about)`);
  await tx.execute(sql`create index on retold (record_key)`);
  await tx.execute(sql`analyze retold`);
  const { rows } = await tx.execute(
    sql`/* any told again */ select exists (select from retold) as again`,
  );
  const filled = rows[0]?.again === true ? sql`with data` : sql`with no data`;
  await tx.execute(sql`/* told rows of records told of more than once */
    create temp table told_row on commit drop as
    with ${keyedRows(derivation)},
    repeated as (
      select keyed.* from keyed join retold
        on retold.job_key = keyed.job_key
        and retold.area_id = keyed.area_id
        and retold.about = keyed.about
      where keyed.record_key is null
      union all
      select keyed.* from keyed join retold on retold.record_key = keyed.record_key
    )
    select
      repeated.*,
      row_number() over same_record as version,
      first_value(upload_id) over same_record as first_upload,
      first_value(line) over same_record as first_line,
      first_value(part) over same_record as first_part
    from repeated
    window same_record as (
      partition by
        record_key,
        case when record_key is null then job_key end,
        case when record_key is null then area_id end,
        case when record_key is null then about end
      order by upload_id, line, part
    )
    ${filled}`);
  await tx.execute(sql`analyze told_row`);
}

/** Which kinds of rows the site's uploads hold. */
export async function readToldKinds(
  derivation: Pick<ToldSource, 'tx' | 'organisationId' | 'siteId'>,
): Promise<ToldKinds> {
  const { tx, organisationId, siteId } = derivation;
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  const { rows } = await tx.execute(sql`/* kinds of told rows */
    select
      exists (
          select from upload
          where ${ofSite} and 'event' in (plan ->> 'shape', plan_given ->> 'shape')
        ) as events,
      exists (
        select from upload_area where ${ofSite} and replaces_from is not null
      ) as replaced`);
  return z.object({ events: z.boolean(), replaced: z.boolean() }).parse(rows[0]);
}

/**
 * CTE `told`: every row told of a touched job that no later upload voids, under one of the names of its
 * area. Read again wherever it is named: that costs less than keeping it.
 */
const toldRows = ({ organisationId, siteId, told, moves }: ToldSource): SQL => {
  const { areaId, join } = underOneName(moves);
  return sql`
    told as not materialized (
      select
        told.job_key, ${areaId} as area_id, told.upload_id, told.line, told.part, told.event,
        told.arrived, told.started, told.finished, told.second_reading, told.record_key, ${rest}
      from upload_row as told join touched_job using (job_key) ${join}
      where told.organisation_id = ${organisationId} and told.site_id = ${siteId}
        ${told?.replaced ? sql`and not ${isVoided(organisationId, siteId, moves)}` : sql``}
    )`;
};

const rest = sql`
  told.quantity, told.family, told.due, told.priority, told.work_content, told.value, told.resource,
  told.status, told.ending, told.parent`;

/** CTEs that end with `keyed`: every row told of a touched job, with what tells its record apart. Needs `begun`. */
export const keyedRows = (derivation: ToldSource): SQL => sql`
  ${toldRows(derivation)},
  ${keyedWhereCounted(derivation, derivation.told?.events ? keyedWithEvents : keyedStays)}`;

const begunThere = sql`
  left join begun
    on told.started is null
    and begun.job_key = told.job_key
    and begun.area_id = told.area_id
    and begun.arrived = told.arrived`;

const keyedStays = sql`
  select
    told.job_key, told.area_id, told.upload_id, told.line, told.part, told.event,
    told.arrived, told.started, told.finished, told.record_key, ${rest},
    coalesce(told.started, begun.started, told.arrived, told.finished) as about
  from told ${begunThere}`;

/** An event belongs to the record that pairing found; its own id tells the event, not the record. */
const keyedWithEvents = sql`
  select
    coalesce(paired.job_key, told.job_key) as job_key,
    coalesce(paired.area_id, told.area_id) as area_id,
    told.upload_id, told.line, told.part, told.event,
    told.arrived, told.started, coalesce(paired.finished, told.finished) as finished,
    case when told.event is null then told.record_key end as record_key, ${rest},
    case
      when paired.about is null
        then coalesce(told.started, begun.started, told.arrived, told.finished)
      when paired.about = told.arrived then coalesce(begun.started, paired.about)
      else paired.about
    end as about
  from told
  left join paired_event as paired
    on told.event is not null
    and paired.upload_id = told.upload_id and paired.line = told.line and paired.part = told.part
  ${begunThere}`;
