import { sql, type SQL } from 'drizzle-orm';
import type { Derivation } from './derivation.ts';

/**
 * Temporary table `paired_event`: for each event row told of a touched job, where its event now stands and
 * the record that it belongs to.
 *
 * Rows tell of the same event by their record id and kind, else by job, area, kind and time; the latest of
 * them tells where and when it was. Per job and area each start takes the earliest unused finish at or after
 * it and not after the next start; then each arrival takes the next start, or a finish that no start took,
 * unless another arrival comes before. A finish at a local time that occurs twice is read the second time
 * where only then a start precedes it.
 *
 * `about` is the record's start, else its arrival, else its finish; `finished` the moment of a finish as it
 * is read; `pair` what the record has beside the event.
 *
 * @param told statement prefix with the CTE `told`
 */
export async function pairEvents({ tx }: Pick<Derivation, 'tx'>, told: SQL): Promise<void> {
  await tx.execute(sql`drop table if exists told_event, paired_event`);
  await tx.execute(sql`/* events as they now stand */
    create temp table told_event on commit drop as
    ${told},
    version as (
      select
        upload_id, line, part, event, job_key, area_id, second_reading, record_key,
        coalesce(arrived, started, finished) as at
      from told where event is not null
    )
    select
      upload_id, line, part, event,
      last_value(job_key) over same_event as job_key,
      last_value(area_id) over same_event as area_id,
      last_value(at) over same_event as at,
      last_value(second_reading) over same_event as second_reading,
      row_number() over same_event = count(*) over same_event as is_latest,
      last_value(upload_id) over same_event as now_upload,
      last_value(line) over same_event as now_line,
      last_value(part) over same_event as now_part
    from version
    window same_event as (
      partition by
        event, record_key,
        case when record_key is null then job_key end,
        case when record_key is null then area_id end,
        case when record_key is null then at end
      order by upload_id, line, part
      rows between unbounded preceding and unbounded following
    )`);
  await tx.execute(sql`analyze told_event`);
  await readSecondTime({ tx });
  await tx.execute(sql`/* pair events */
    create temp table paired_event on commit drop as
    with latest as (select * from told_event where is_latest),
    ${startsAndFinishes(sql`latest`)},
    left_over as (
      select upload_id, line, part, job_key, area_id, event, at, taken, about, pair from taken
      where event = 'started' or not taken
      union all
      select upload_id, line, part, job_key, area_id, event, at, false, at, null from latest
      where event = 'arrived'
    ),
    waited as (
      select
        *,
        lag(event) over in_order as event_before,
        lag(at) over in_order as at_before,
        lead(event) over in_order as event_behind,
        lead(at) over in_order as at_behind
      from left_over
      window in_order as (
        partition by job_key, area_id
        order by at, case event when 'arrived' then 0 when 'started' then 1 else 2 end,
          upload_id, line, part
      )
    ),
    matched as (
      select
        upload_id, line, part, job_key, area_id, event, at,
        case
          when event = 'started' then at
          when event = 'arrived' then case when event_behind = 'started' then at_behind else at end
          else case when event_before = 'arrived' then at_before else at end
        end as about,
        case
          when event = 'started' then pair
          when event = 'arrived' then case when event_behind <> 'arrived' then event_behind end
          else case when event_before = 'arrived' then 'arrived' end
        end as pair
      from waited
      union all
      select upload_id, line, part, job_key, area_id, event, at, about, pair
      from taken where event = 'finished' and taken
    )
    select
      told.upload_id, told.line, told.part,
      told.job_key, told.area_id, told.event,
      case when told.event = 'finished' and told.is_latest then matched.at end as finished,
      matched.about, matched.pair
    from told_event as told join matched
      on matched.upload_id = told.now_upload
      and matched.line = told.now_line
      and matched.part = told.now_part`);
  await tx.execute(sql`create unique index on paired_event (upload_id, line, part)`);
  await tx.execute(sql`analyze paired_event`);
}

/** Takes the second reading of finishes that no start takes at the first, where a start lies between both. */
async function readSecondTime({ tx }: Pick<Derivation, 'tx'>): Promise<void> {
  await tx.execute(sql`/* finishes read the second time */
    with doubtful as (
      select distinct job_key, area_id from told_event
      where is_latest and event = 'finished' and second_reading is not null
    ),
    latest as (
      select told_event.* from told_event join doubtful using (job_key, area_id) where is_latest
    ),
    ${startsAndFinishes(sql`latest`)}
    update told_event as told set at = told.second_reading
    from taken
    where taken.event = 'finished' and not taken.taken
      and told.now_upload = taken.upload_id
      and told.now_line = taken.line
      and told.now_part = taken.part
      and told.second_reading is not null
      and exists (
        select from told_event as began
        where began.job_key = told.job_key and began.area_id = told.area_id
          and began.is_latest and began.event = 'started'
          and began.at > told.at and began.at <= told.second_reading
      )`);
}

/**
 * CTEs that end with `taken`: the starts and finishes among the events, each with the start of its record as
 * `about` and with what it is paired with.
 *
 * In order of time a start takes the finish that follows it before the next start. Where both fall on one
 * instant, a finish comes first if a start is open: that is so where the last instant that held more of one
 * kind than of the other held more starts; such an instant leaves open what was open.
 */
const startsAndFinishes = (events: SQL): SQL => sql`
  instant as (
    select
      job_key, area_id, at,
      count(*) filter (where event = 'started') as starts,
      count(*) filter (where event = 'finished') as finishes
    from ${events} where event <> 'arrived'
    group by job_key, area_id, at
  ),
  opened as (
    select
      job_key, area_id, at,
      coalesce(
        max(at) filter (where starts > finishes) over before
          > coalesce(max(at) filter (where starts < finishes) over before, '-infinity'),
        false
      ) as is_open
    from instant
    window before as (
      partition by job_key, area_id order by at
      rows between unbounded preceding and 1 preceding
    )
  ),
  placed_event as (
    select
      told.upload_id, told.line, told.part, told.job_key, told.area_id, told.event, told.at,
      2 * row_number() over (
        partition by told.job_key, told.area_id, told.at, told.event
        order by told.upload_id, told.line, told.part
      ) - ((told.event = 'finished') = is_open)::integer as place
    from ${events} as told join opened
      on opened.job_key = told.job_key
      and opened.area_id = told.area_id
      and opened.at = told.at
    where told.event <> 'arrived'
  ),
  beside as (
    select
      *,
      lag(event) over in_order as event_before,
      lag(at) over in_order as at_before,
      lead(event) over in_order as event_behind
    from placed_event
    window in_order as (partition by job_key, area_id order by at, place)
  ),
  taken as (
    select
      upload_id, line, part, job_key, area_id, event, at,
      coalesce(
        case event when 'started' then event_behind = 'finished' else event_before = 'started' end,
        false
      ) as taken,
      case when event = 'finished' and event_before = 'started' then at_before else at end as about,
      case
        when event = 'started' then case when event_behind = 'finished' then event_behind end
        when event_before = 'started' then event_before
      end as pair
    from beside
  )`;
