import { sql, type SQL } from 'drizzle-orm';
import { countedSpans, namesOfAreas, type AreaMove, type CountedSpan } from '../area-moves.ts';

const moment = (at: number): string =>
  Number.isFinite(at) ? new Date(at).toISOString() : at < 0 ? '-infinity' : 'infinity';

/** The spans as rows `span (area_id, counts_from, counts_until, counts_for)`. */
const spanRows = (spans: readonly CountedSpan[]): SQL => sql`
  unnest(
    ${sql.param(spans.map((span) => span.areaId))}::integer[],
    ${sql.param(spans.map((span) => moment(span.from)))}::timestamptz[],
    ${sql.param(spans.map((span) => moment(span.until)))}::timestamptz[],
    ${sql.param(spans.map((span) => span.countsFor))}::integer[]
  ) as span (area_id, counts_from, counts_until, counts_for)`;

/** The area that a row told of an area counts for, by the moment of its record; an expression. */
export const areaCounted = (moves: readonly AreaMove[], areaId: SQL, at: SQL): SQL =>
  moves.length === 0
    ? areaId
    : sql`coalesce(
        (
          select span.counts_for from ${spanRows(countedSpans(moves))}
          where span.area_id = ${areaId}
            and tstzrange(span.counts_from, span.counts_until) @> ${at}
        ),
        ${areaId}
      )`;

/** Joins `told` with the area that its own is merely another name of, and says which column to read. */
export function underOneName(moves: readonly AreaMove[]): { areaId: SQL; join: SQL } {
  const names = [...namesOfAreas(moves)];
  if (names.length === 0) return { areaId: sql`told.area_id`, join: sql`` };
  return {
    areaId: sql`coalesce(one_name.counts_for, told.area_id)`,
    join: sql`
      left join unnest(
        ${sql.param(names.map(([areaId]) => areaId))}::integer[],
        ${sql.param(names.map(([, countsFor]) => countsFor))}::integer[]
      ) as one_name (area_id, counts_for) on one_name.area_id = told.area_id`,
  };
}

/** The spans of areas that count for different ones at different times. */
function datedSpans(moves: readonly AreaMove[]): CountedSpan[] {
  const names = namesOfAreas(moves);
  return countedSpans(moves).filter((span) => !names.has(span.areaId));
}

/**
 * CTE `keyed`, from the statement that gives it before any area is moved from a date: a record counts for
 * the area that its start (arrival, else finish, where there is none) falls to, and all its rows with it.
 * With a record id the start is the last that any of its rows gave.
 */
export function keyedWhereCounted(
  {
    organisationId,
    siteId,
    moves,
  }: { organisationId: number; siteId: number; moves: readonly AreaMove[] },
  keyed: SQL,
): SQL {
  const spans = datedSpans(moves);
  if (spans.length === 0) return sql`keyed as not materialized (${keyed})`;
  return sql`
    keyed_as_told as not materialized (${keyed}),
    keyed as not materialized (
      select
        told.job_key, coalesce(span.counts_for, told.area_id) as area_id,
        told.upload_id, told.line, told.part, told.event,
        told.arrived, told.started, told.finished, told.record_key,
        told.quantity, told.family, told.due, told.priority, told.work_content, told.value,
        told.resource, told.status, told.ending, told.parent, told.about
      from keyed_as_told as told
      left join ${spanRows(spans)}
        on span.area_id = told.area_id
        and tstzrange(span.counts_from, span.counts_until) @> case
          when told.record_key is null then told.about
          else (
            select coalesce(
              (array_agg(started order by place) filter (where started is not null))[1],
              (array_agg(arrived order by place) filter (where arrived is not null))[1],
              (array_agg(finished order by place) filter (where finished is not null))[1]
            )
            from (
              select
                started, arrived, finished,
                row_number() over (order by upload_id desc, line desc, part desc) as place
              from upload_row
              where organisation_id = ${organisationId} and site_id = ${siteId}
                and record_key = told.record_key and event is null
            ) as same_record
          )
        end
    )`;
}

/**
 * CTE `told_area`: what each upload says of each area, split by the area that its rows count for and by the
 * beginning of the span in which they do. Rows are looked at only of uploads whose rows fall to several.
 */
export function toldAreas({
  organisationId,
  siteId,
  moves,
}: {
  organisationId: number;
  siteId: number;
  moves: readonly AreaMove[];
}): SQL {
  const columns = sql`
    upload_id, area_id as told_area_id, area_id, '-infinity'::timestamptz as counts_from,
    rows, first_at, latest_at, speaks_until, has_quantities, has_starts`;
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  if (moves.length === 0)
    return sql`told_area as (select ${columns} from upload_area where ${ofSite})`;
  return sql`
    span as materialized (select * from ${spanRows(countedSpans(moves))}),
    spoken as (
      select
        said.upload_id, said.area_id, said.rows, said.first_at, said.latest_at, said.speaks_until,
        said.has_quantities, said.has_starts, span.counts_for, span.counts_from,
        span.area_id is null and said.area_id in (select area_id from span) as is_split
      from upload_area as said
      left join span
        on span.area_id = said.area_id
        and said.first_at >= span.counts_from and said.latest_at < span.counts_until
      where said.organisation_id = ${organisationId} and said.site_id = ${siteId}
    ),
    told_area as (
      select
        upload_id, area_id as told_area_id, coalesce(counts_for, area_id) as area_id,
        coalesce(counts_from, '-infinity') as counts_from, rows, first_at, latest_at, speaks_until, has_quantities, has_starts
      from spoken where not is_split
      union all
      select
        told.upload_id, told.area_id, span.counts_for, span.counts_from, count(*),
        min(least(arrived, started, finished)), max(greatest(arrived, started, finished)),
        min(spoken.speaks_until), bool_or(quantity is not null), bool_or(started is not null)
      from spoken
      join upload_row as told
        on told.organisation_id = ${organisationId} and told.site_id = ${siteId}
        and told.upload_id = spoken.upload_id and told.area_id = spoken.area_id
      join span
        on span.area_id = told.area_id
        and coalesce(started, arrived, finished) >= span.counts_from
        and coalesce(started, arrived, finished) < span.counts_until
      where spoken.is_split
      group by told.upload_id, told.area_id, span.counts_for, span.counts_from
    )`;
}
