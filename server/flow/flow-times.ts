import { sql, type SQL } from 'drizzle-orm';
import { z } from 'zod';
import { instantValue } from './instant-value.ts';
import { lengthReaches } from './length-reach.ts';
import type { SiteReader } from './zone-reader.ts';

const numeric = z.coerce.number();
const seconds = z.coerce.number().nullable();

const flowRow = z.object({
  zone_id: z.number(),
  /** Step of the departure, counted from 1. */
  place: z.number(),
  departures: numeric,
  inferred: numeric,
  flow_sum: numeric,
  flow_mean: seconds,
  percentiles: z.array(z.number()).nullable(),
  queue_mean: seconds,
  process_mean: seconds,
});

/** Flow times of the stays that left within one step, in seconds; percentiles 50, 85 and 95. */
export interface FlowTimes {
  departures: number;
  /** Of these, with a finish that was inferred from a later start. */
  inferred: number;
  flowSum: number;
  flowMean: number | null;
  percentiles: readonly (number | null)[];
  queueMean: number | null;
  processMean: number | null;
}

export const noFlowTimes: FlowTimes = {
  departures: 0,
  inferred: 0,
  flowSum: 0,
  flowMean: null,
  percentiles: [null, null, null],
  queueMean: null,
  processMean: null,
};

/**
 * Exact flow times by step of departure, percentiles by type 7 of Hyndman & Fan (1996).
 *
 * @param borders n + 1 moments in order for n steps
 * @returns by zone, one entry per step
 */
export async function readFlowTimes(
  reader: SiteReader,
  zoneIds: readonly number[],
  borders: readonly number[],
): Promise<Map<number, FlowTimes[]>> {
  const { rows } = await reader.tx.execute(sql`/* flow times */
    with departed as (${departuresWithin(reader, zoneIds, borders)})
    select
      zone_id, place,
      count(*) as departures,
      count(*) filter (where finish_inferred) as inferred,
      sum(flow_microseconds) / 1000000.0 as flow_sum,
      avg(flow_microseconds) / 1000000.0 as flow_mean,
      percentile_cont(array[0.5, 0.85, 0.95]) within group (
        order by flow_microseconds / 1000000.0::double precision
      ) as percentiles,
      avg(queue_microseconds) / 1000000.0 as queue_mean,
      avg(process_microseconds) / 1000000.0 as process_mean
    from departed
    group by zone_id, place`);
  const found = new Map(zoneIds.map((zoneId) => [zoneId, borders.slice(1).map(() => noFlowTimes)]));
  for (const row of z.array(flowRow).parse(rows)) {
    const steps = found.get(row.zone_id);
    if (!steps) continue;
    steps[row.place - 1] = {
      departures: row.departures,
      inferred: row.inferred,
      flowSum: row.flow_sum,
      flowMean: row.flow_mean,
      percentiles: row.percentiles ?? [null, null, null],
      queueMean: row.queue_mean,
      processMean: row.process_mean,
    };
  }
  return found;
}

/** The stays that left between the first and the last border, with the step in which they left. */
function departuresWithin(
  { organisationId, siteId }: SiteReader,
  zoneIds: readonly number[],
  borders: readonly number[],
): SQL {
  const from = sql`${instantValue(borders[0] ?? 0)}::timestamptz`;
  const to = sql`${instantValue(borders.at(-1) ?? 0)}::timestamptz`;
  return sql`
    select
      found.zone_id, found.finish_inferred, found.queue_microseconds, found.process_microseconds,
      microseconds(found.left_at - found.entered) as flow_microseconds,
      width_bucket(found.left_at, ${sql.param(borders.map(instantValue))}::timestamptz[]) as place
    from unnest(${sql.param([...zoneIds])}::integer[]) as asked (zone_id)
    cross join (${lengthReaches}) as length_reach
    cross join lateral (
      select * from zone_stay
      where organisation_id = ${organisationId} and site_id = ${siteId}
        and zone_id = asked.zone_id
        and length_class = class and class <> 99
        and entered < ${to} and entered >= ${from} - reach
        and left_at >= ${from} and left_at < ${to}
      offset 0
    ) as found`;
}
