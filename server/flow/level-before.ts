import { sql, type SQL } from 'drizzle-orm';
import { z } from 'zod';
import { localDay, stepBorders } from '../../shared/local-time.ts';
import type { Measure } from '../db/schema/levels.ts';
import { instantValue } from './instant-value.ts';
import { trackKey } from './track-key.ts';
import type { SiteReader } from './zone-reader.ts';

/** A statement (zone_id, measure) with every level asked for, to be named `asked`. */
export const askedLevels = (zoneIds: readonly number[], measures: readonly Measure[]): SQL => sql`
  select zone_id, measure
  from unnest(${sql.param([...zoneIds])}::integer[]) as zone_id
  cross join unnest(${sql.param([...new Set(measures)])}::text[]) as measure`;

/** The condition that rows of a table of levels are of the level in `asked`. */
export const ofAsked = ({ organisationId, siteId }: SiteReader, table: string): SQL => sql`
  ${sql.identifier(table)}.organisation_id = ${organisationId}
  and ${sql.identifier(table)}.site_id = ${siteId}
  and ${sql.identifier(table)}.zone_id = asked.zone_id
  and ${sql.identifier(table)}.measure = asked.measure`;

/**
 * The level in `asked` just before a local hour: where the last day before that of the hour ended, and what
 * the hours between changed.
 */
export function levelBefore(reader: SiteReader, hour: number): SQL {
  const { rules } = reader;
  const dayOfHour = stepBorders(rules, 'day', hour, hour + 1)[0] ?? hour;
  return sql`
    coalesce(
      (
        select level_end from level_day
        where ${ofAsked(reader, 'level_day')} and day < ${localDay(rules, dayOfHour)}::date
        order by day desc limit 1
      ),
      0
    ) + coalesce(
      (
        select sum(ups - downs) from level_hour
        where ${ofAsked(reader, 'level_hour')}
          and hour >= ${instantValue(dayOfHour)}::timestamptz
          and hour < ${instantValue(hour)}::timestamptz
      ),
      0
    )`;
}

const levelRow = z.object({ zone_id: z.number(), measure: z.string(), level: z.coerce.number() });

/** The levels of zones just before a moment that begins a local hour, by `trackKey`. */
export async function readLevelsBefore(
  reader: SiteReader,
  zoneIds: readonly number[],
  measures: readonly Measure[],
  hour: number,
): Promise<Map<string, number>> {
  const { rows } = await reader.tx.execute(sql`/* levels before */
    with asked as (${askedLevels(zoneIds, measures)})
    select zone_id, measure, ${levelBefore(reader, hour)} as level from asked`);
  return new Map(
    z
      .array(levelRow)
      .parse(rows)
      .map((row) => [trackKey(row.zone_id, row.measure), row.level]),
  );
}
