import { sql, type SQL } from 'drizzle-orm';
import { z } from 'zod';
import type { LevelBlock } from '../methods/level-steps.ts';
import { instantValue } from './instant-value.ts';
import { lengthReaches } from './length-reach.ts';
import type { Measure } from '../db/schema/levels.ts';
import type { Period, SiteReader } from './zone-reader.ts';

const changeRow = z.object({
  microseconds: z.coerce.number(),
  ups: z.coerce.number(),
  downs: z.coerce.number(),
});

/**
 * The changes of one level within a period of less than an hour, straight from the stays, netted by
 * instant: for the edges of a period that cut through an hour.
 *
 * @param throughEnd whether changes at the very end belong to it
 */
export async function readLevelChanges(
  reader: SiteReader,
  zoneId: number,
  measure: Measure,
  period: Period,
  throughEnd = false,
): Promise<LevelBlock[]> {
  if (period.to < period.from || (period.to === period.from && !throughEnd)) return [];
  const { tx, organisationId, siteId } = reader;
  const weight = measure.endsWith('units') ? sql`coalesce(quantity, 1)` : sql`1`;
  const rises = measure.startsWith('in_process') ? sql`process_from` : sql`inside_from`;
  const from = sql`${instantValue(period.from)}::timestamptz`;
  const to = sql`${instantValue(period.to)}::timestamptz`;
  const within = (at: SQL) =>
    throughEnd ? sql`${at} >= ${from} and ${at} <= ${to}` : sql`${at} >= ${from} and ${at} < ${to}`;
  const { rows } = await tx.execute(sql`/* level changes */
    with near as (
      select ${rises} as up_at, until as down_at, ${weight} as weight
      from (${lengthReaches}) as length_reach
      cross join lateral (
        select * from zone_span
        where organisation_id = ${organisationId} and site_id = ${siteId} and zone_id = ${zoneId}
          and length_class = class
          and entered <= ${to} and entered >= ${from} - reach
          and (left_at is null or left_at >= ${from})
        offset 0
      ) as found
      where ${rises} is not null
    ),
    change as (
      select up_at as at, weight as up, 0 as down from near where ${within(sql`up_at`)}
      union all
      select down_at, 0, weight from near where ${within(sql`down_at`)}
    )
    select extract(epoch from at) * 1000000 as microseconds, sum(up) as ups, sum(down) as downs
    from change group by at order by at`);
  return z
    .array(changeRow)
    .parse(rows)
    .map(({ microseconds, ups, downs }) => ({
      starts: microseconds / 1000,
      ends: microseconds / 1000,
      ups,
      downs,
      gathered: 0,
      highest: ups - downs,
    }));
}
