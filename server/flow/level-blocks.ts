import { sql } from 'drizzle-orm';
import { z } from 'zod';
import {
  hourEnd,
  hourStart,
  hourStretches,
  localDay,
  stepBorders,
  type HourStretch,
} from '../../shared/local-time.ts';
import type { LevelBlock } from '../methods/level-steps.ts';
import type { Period, SiteReader } from './zone-reader.ts';
import { instantValue } from './instant-value.ts';

export type Measure = 'inside_jobs' | 'in_process_jobs' | 'inside_units' | 'in_process_units';

/** A level just before a period, and its changes in it. */
export interface LevelTrack {
  level: number;
  blocks: LevelBlock[];
}

/** The levels of zones just before a moment that begins a local hour, by `trackKey`. */
export async function readLevelsBefore(
  reader: SiteReader,
  zoneIds: readonly number[],
  measures: readonly Measure[],
  hour: number,
): Promise<Map<string, number>> {
  const tracks = await readLevelBlocks(reader, zoneIds, measures, { from: hour, to: hour });
  return new Map([...tracks].map(([key, track]) => [key, track.level]));
}

const numeric = z.coerce.number();
const blockRow = z.object({
  zone_id: z.number(),
  measure: z.string(),
  /** `level` gives the level before the period, `hour` and `day` a block of changes. */
  grain: z.enum(['level', 'hour', 'day']),
  starts: z.coerce.date(),
  ends: z.coerce.date(),
  ups: numeric,
  downs: numeric,
  up_offset: numeric,
  down_offset: numeric,
  gathered: numeric,
  highest: numeric,
});

/**
 * The levels of zones just before a period of whole local hours, and their changes in it: by day where
 * whole days lie in the period (unless `byHour`), by hour elsewhere.
 *
 * @returns tracks by `trackKey(zoneId, measure)`; every zone and measure asked for has one
 */
export async function readLevelBlocks(
  reader: SiteReader,
  zoneIds: readonly number[],
  measures: readonly Measure[],
  period: Period,
  byHour = false,
): Promise<Map<string, LevelTrack>> {
  const { tx, organisationId, siteId, rules } = reader;
  const dayOfStart = stepBorders(rules, 'day', period.from, period.from + 1)[0] ?? period.from;
  const whole = byHour ? { from: period.to, to: period.to } : wholeDays(reader, period);
  const ofZone = (table: string) => sql`
    ${sql.identifier(table)}.organisation_id = ${organisationId}
    and ${sql.identifier(table)}.site_id = ${siteId}
    and ${sql.identifier(table)}.zone_id = asked.zone_id
    and ${sql.identifier(table)}.measure = asked.measure`;
  const { rows } = await tx.execute(sql`/* level blocks */
    with asked as (
      select zone_id, measure
      from unnest(${sql.param([...zoneIds])}::integer[]) as zone_id
      cross join unnest(${sql.param([...new Set(measures)])}::level_measure[]) as measure
    )
    select
      zone_id, measure, 'level' as grain,
      ${instantValue(period.from)}::timestamptz as starts, ${instantValue(period.from)}::timestamptz as ends,
      coalesce(
        (
          select level_end from level_day
          where ${ofZone('level_day')} and day < ${localDay(rules, dayOfStart)}::date
          order by day desc limit 1
        ),
        0
      ) as ups,
      -coalesce(
        (
          select sum(ups - downs) from level_hour
          where ${ofZone('level_hour')}
            and hour >= ${instantValue(dayOfStart)}::timestamptz
            and hour < ${instantValue(period.from)}::timestamptz
        ),
        0
      ) as downs,
      0::numeric as up_offset, 0::numeric as down_offset, 0::numeric as gathered, 0::numeric as highest
    from asked
    union all
    select
      asked.zone_id, asked.measure, 'hour', hour, hour, ups, downs, up_offset, down_offset, 0, highest
    from asked join level_hour on ${ofZone('level_hour')}
    where hour >= ${instantValue(period.from)}::timestamptz
      and hour < ${instantValue(period.to)}::timestamptz
      and (
        hour < ${instantValue(whole.from)}::timestamptz
        or hour >= ${instantValue(whole.to)}::timestamptz
      )
    union all
    select
      asked.zone_id, asked.measure, 'day', starts, ends, ups, downs, 0, 0,
      integral - level_start * microseconds(ends - starts),
      peak - level_start
    from asked join level_day on ${ofZone('level_day')}
    where day >= ${localDay(rules, whole.from)}::date and day < ${localDay(rules, whole.to)}::date`);
  return tracks(rows, zoneIds, measures, hourStretches(rules, period.from - 1, period.to + 1));
}

export const trackKey = (zoneId: number, measure: string): string => `${zoneId} ${measure}`;

/** The whole local days within a period; empty at its end where there is none. */
export function wholeDays({ rules }: SiteReader, period: Period): Period {
  const [first, second] = stepBorders(rules, 'day', period.from, period.from + 1);
  const from = first === period.from ? first : (second ?? period.to);
  const to = stepBorders(rules, 'day', period.to, period.to + 1)[0] ?? period.to;
  return from < to ? { from, to } : { from: period.to, to: period.to };
}

function tracks(
  rows: unknown[],
  zoneIds: readonly number[],
  measures: readonly Measure[],
  stretches: readonly HourStretch[],
): Map<string, LevelTrack> {
  const found = new Map<string, LevelTrack>();
  for (const zoneId of zoneIds)
    for (const measure of measures) found.set(trackKey(zoneId, measure), { level: 0, blocks: [] });
  for (const row of rows.map((each) => blockRow.parse(each))) {
    const track = found.get(trackKey(row.zone_id, row.measure));
    if (!track) continue;
    if (row.grain === 'level') track.level = row.ups - row.downs;
    else track.blocks.push(row.grain === 'day' ? dayBlock(row) : hourBlock(row, stretches));
  }
  for (const track of found.values()) track.blocks.sort((one, other) => one.starts - other.starts);
  return found;
}

type BlockRow = z.infer<typeof blockRow>;

const dayBlock = (row: BlockRow): LevelBlock => ({
  starts: row.starts.getTime(),
  ends: row.ends.getTime(),
  ups: row.ups,
  downs: row.downs,
  gathered: row.gathered / 1e6,
  highest: row.highest,
});

function hourBlock(row: BlockRow, stretches: readonly HourStretch[]): LevelBlock {
  const starts = row.starts.getTime();
  const ends = hourEnd(stretches, hourStart(stretches, starts));
  const seconds = (ends - starts) / 1000;
  return {
    starts,
    ends,
    ups: row.ups,
    downs: row.downs,
    gathered: (row.ups - row.downs) * seconds - (row.up_offset - row.down_offset) / 1e6,
    highest: row.highest,
  };
}
