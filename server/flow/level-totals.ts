import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { hourEnd, hourStart, hourStretches, localDay } from '../../shared/local-time.ts';
import type { LevelFigures } from '../methods/level-steps.ts';
import type { Measure } from '../db/schema/levels.ts';
import { instantValue } from './instant-value.ts';
import { askedLevels, levelBefore, ofAsked } from './level-before.ts';
import { trackKey } from './track-key.ts';
import { wholeDays } from './whole-days.ts';
import type { Period, SiteReader } from './zone-reader.ts';

const numeric = z.coerce.number();
const totalRow = z.object({
  zone_id: z.number(),
  measure: z.string(),
  level_start: numeric,
  level_end: numeric,
  integral: numeric,
  peak: numeric,
  ups: numeric,
  downs: numeric,
});

/**
 * Levels of many zones over one period of whole local hours, summed where they lie: what `levelSteps` says
 * of one step, for the Floor. Hours and days without a change have no row: the level holds across them.
 *
 * @returns by `trackKey(zoneId, measure)`
 */
export async function readLevelTotals(
  reader: SiteReader,
  zoneIds: readonly number[],
  measures: readonly Measure[],
  period: Period,
): Promise<Map<string, LevelFigures>> {
  const { tx, rules } = reader;
  const whole = wholeDays(reader, period);
  const at = (moment: number) => sql`${instantValue(moment)}::timestamptz`;
  const hours = hourEnds(reader, period, whole);
  const { rows } = await tx.execute(sql`/* level totals */
    with asked as (${askedLevels(zoneIds, measures)}),
    before as (
      select zone_id, measure, ${levelBefore(reader, period.from)} as level from asked
    ),
    cut_hour as (
      select * from unnest(
        ${sql.param(hours.map((hour) => instantValue(hour.starts)))}::timestamptz[],
        ${sql.param(hours.map((hour) => instantValue(hour.ends)))}::timestamptz[]
      ) as cut (starts, ends)
    ),
    block as (
      -- All whole days as one block: only their sums and their peak are asked for.
      select
        zone_id, measure, min(starts) as starts, ${at(whole.to)} as ends,
        sum(ups) as ups, sum(downs) as downs,
        sum(
          integral - level_start * microseconds(ends - starts)
          + (ups - downs) * microseconds(${at(whole.to)} - ends)
        ) as gathered,
        null::numeric as highest, max(peak) as peak
      from asked cross join lateral (
        select starts, ends, level_start, ups, downs, integral, peak from level_day
        where ${ofAsked(reader, 'level_day')}
          and day >= ${localDay(rules, whole.from)}::date and day < ${localDay(rules, whole.to)}::date
        offset 0
      ) as of_level
      group by zone_id, measure
      union all
      select
        asked.zone_id, asked.measure, starts, ends, ups, downs,
        (ups - downs) * microseconds(ends - starts) - up_offset + down_offset, highest, null
      from asked cross join cut_hour
      join level_hour on ${ofAsked(reader, 'level_hour')} and level_hour.hour = cut_hour.starts
    ),
    running as (
      select
        block.*,
        level + coalesce(sum(ups - downs) over (
          partition by zone_id, measure order by starts
          rows between unbounded preceding and 1 preceding
        ), 0) as level_before,
        lead(starts, 1, ${at(period.to)}) over (
          partition by zone_id, measure order by starts
        ) as next_starts
      from block join before using (zone_id, measure)
    ),
    summed as (
      select
        zone_id, measure, min(starts) as first_starts, sum(ups) as ups, sum(downs) as downs,
        max(coalesce(peak, level_before + highest)) as peak,
        sum(
          level_before * microseconds(ends - starts) + gathered
          + (level_before + ups - downs) * microseconds(next_starts - ends)
        ) as integral
      from running group by zone_id, measure
    )
    select
      zone_id, measure, level as level_start,
      level + coalesce(ups, 0) - coalesce(downs, 0) as level_end,
      coalesce(ups, 0) as ups, coalesce(downs, 0) as downs,
      (
        coalesce(integral, 0)
        + level * microseconds(coalesce(first_starts, ${at(period.to)}) - ${at(period.from)})
      ) / 1000000.0 as integral,
      greatest(
        peak,
        case when first_starts is null or first_starts > ${at(period.from)} then level end
      ) as peak
    from before left join summed using (zone_id, measure)`);
  return new Map(
    z
      .array(totalRow)
      .parse(rows)
      .map((row) => [
        trackKey(row.zone_id, row.measure),
        {
          levelStart: row.level_start,
          levelEnd: row.level_end,
          integral: row.integral,
          peak: row.peak,
          ups: row.ups,
          downs: row.downs,
        },
      ]),
  );
}

/** The hours of a period that lie outside its whole days, with their ends. */
function hourEnds({ rules }: SiteReader, period: Period, whole: Period) {
  const stretches = hourStretches(rules, period.from - 1, period.to + 1);
  const hours = [];
  for (const part of [
    { from: period.from, to: whole.from },
    { from: whole.to, to: period.to },
  ])
    for (let starts = part.from; starts < part.to; starts = hourEnd(stretches, starts))
      hours.push({ starts, ends: hourEnd(stretches, hourStart(stretches, starts)) });
  return hours;
}
