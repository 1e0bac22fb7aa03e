import { sql } from 'drizzle-orm';
import { z } from 'zod';
import {
  hourEnd,
  hourStart,
  hourStretches,
  localDay,
  type HourStretch,
} from '../../shared/local-time.ts';
import type { LevelBlock } from '../methods/level-steps.ts';
import type { Measure } from '../db/schema/levels.ts';
import { instantValue } from './instant-value.ts';
import { askedLevels, levelBefore, ofAsked } from './level-before.ts';
import { trackKey } from './track-key.ts';
import { wholeDays } from './whole-days.ts';
import type { Period, SiteReader } from './zone-reader.ts';

/** A level just before a period, and its changes in it. */
export interface LevelTrack {
  level: number;
  blocks: LevelBlock[];
}

const numeric = z.coerce.number();
const blockRow = z.object({
  zone_id: z.number(),
  measure: z.string(),
  /** `level` gives the level before the period as its `ups`, `hour` and `day` a block of changes. */
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
  const { tx, rules } = reader;
  const at = (moment: number) => sql`${instantValue(moment)}::timestamptz`;
  const whole = byHour ? { from: period.to, to: period.to } : wholeDays(reader, period);
  const { rows } = await tx.execute(sql`/* level blocks */
    with asked as (${askedLevels(zoneIds, measures)})
    select
      zone_id, measure, 'level' as grain, ${at(period.from)} as starts, ${at(period.from)} as ends,
      ${levelBefore(reader, period.from)} as ups, 0::numeric as downs,
      0::numeric as up_offset, 0::numeric as down_offset, 0::numeric as gathered, 0::numeric as highest
    from asked
    union all
    select
      asked.zone_id, asked.measure, 'hour', hour, hour, ups, downs, up_offset, down_offset, 0, highest
    from asked join level_hour on ${ofAsked(reader, 'level_hour')}
    where hour >= ${at(period.from)} and hour < ${at(period.to)}
      and (hour < ${at(whole.from)} or hour >= ${at(whole.to)})
    union all
    select
      asked.zone_id, asked.measure, 'day', starts, ends, ups, downs, 0, 0,
      integral - level_start * microseconds(ends - starts),
      peak - level_start
    from asked join level_day on ${ofAsked(reader, 'level_day')}
    where day >= ${localDay(rules, whole.from)}::date and day < ${localDay(rules, whole.to)}::date`);
  return tracks(rows, zoneIds, measures, hourStretches(rules, period.from - 1, period.to + 1));
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
    if (row.grain === 'level') track.level = row.ups;
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
