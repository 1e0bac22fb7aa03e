import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { localDay, type ZoneRules } from '../../shared/local-time.ts';
import { binnedPercentiles } from '../methods/binned-percentile.ts';
import { noFlowTimes, type FlowTimes } from './flow-times.ts';
import { instantValue } from './instant-value.ts';
import type { SiteReader } from './zone-reader.ts';

const numeric = z.coerce.number();
const binsRow = z.object({
  zone_id: z.number(),
  place: z.number(),
  departures: numeric,
  flow: numeric,
  queue_known: numeric,
  queue: numeric,
  process_known: numeric,
  process: numeric,
  bins: z.array(z.number()),
  counts: z.array(numeric),
});

const mean = (microseconds: number, count: number): number | null =>
  count > 0 ? microseconds / count / 1e6 : null;

/**
 * Flow times by step of whole local days, from the sums and bins of each day: means are exact,
 * percentiles within 1 %. For spans with too many departures to sort.
 *
 * @param borders n + 1 local midnights in order for n steps
 */
export async function readBinnedFlowTimes(
  reader: SiteReader,
  zoneIds: readonly number[],
  borders: readonly number[],
): Promise<Map<number, FlowTimes[]>> {
  const { tx, organisationId, siteId, rules } = reader;
  const months = wholeMonths(rules, borders);
  const ofZones = sql`organisation_id = ${organisationId} and site_id = ${siteId}
    and zone_id = any(${sql.param([...zoneIds])}::integer[])`;
  const columns = sql`departures, flow_microseconds, queue_known, queue_microseconds,
    process_known, process_microseconds, bins, counts`;
  const { rows } = await tx.execute(sql`/* binned flow times */
    with of_day as (
      select
        zone_id,
        width_bucket(starts, ${sql.param(borders.map(instantValue))}::timestamptz[]) as place,
        ${columns}
      from flow_day
      where ${ofZones}
        and day >= ${localDay(rules, borders[0] ?? 0)}::date
        and day < ${localDay(rules, borders.at(-1) ?? 0)}::date
        and (day < ${months.from}::date or day >= ${months.to}::date)
      union all
      select zone_id, 1, ${columns} from flow_month
      where ${ofZones} and month >= ${months.from}::date and month < ${months.to}::date
    ),
    histogram as (
      select zone_id, place, bin, sum(departed) as departed
      from of_day cross join unnest(bins, counts) as each (bin, departed)
      group by zone_id, place, bin
    ),
    gathered as (
      select zone_id, place, array_agg(bin) as bins, array_agg(departed) as counts
      from histogram group by zone_id, place
    ),
    summed as (
      select
        zone_id, place,
        sum(departures) as departures, sum(flow_microseconds) as flow,
        sum(queue_known) as queue_known, sum(queue_microseconds) as queue,
        sum(process_known) as process_known, sum(process_microseconds) as process
      from of_day group by zone_id, place
    )
    select * from summed join gathered using (zone_id, place)`);
  const found = new Map(zoneIds.map((zoneId) => [zoneId, borders.slice(1).map(() => noFlowTimes)]));
  for (const row of z.array(binsRow).parse(rows)) {
    const steps = found.get(row.zone_id);
    if (!steps) continue;
    const histogram = new Map(row.bins.map((bin, index) => [bin, row.counts[index] ?? 0]));
    steps[row.place - 1] = {
      departures: row.departures,
      inferred: 0,
      flowSum: row.flow / 1e6,
      flowMean: mean(row.flow, row.departures),
      percentiles: binnedPercentiles(histogram, [0.5, 0.85, 0.95]),
      queueMean: mean(row.queue, row.queue_known),
      processMean: mean(row.process, row.process_known),
    };
  }
  return found;
}

/** The whole months within a single step, from the first of one to the first of another; none elsewhere. */
function wholeMonths(rules: ZoneRules, borders: readonly number[]): { from: string; to: string } {
  const [first, end] = [localDay(rules, borders[0] ?? 0), localDay(rules, borders.at(-1) ?? 0)];
  const to = `${end.slice(0, 7)}-01`;
  const from = first.endsWith('-01') ? first : firstOfNextMonth(first);
  return borders.length === 2 && from < to ? { from, to } : { from: end, to: end };
}

function firstOfNextMonth(day: string): string {
  const [year = 0, month = 1] = day.split('-').map(Number);
  return new Date(Date.UTC(year, month, 1)).toISOString().slice(0, 10);
}
