import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { instantValue } from './instant-value.ts';
import { lengthReaches } from './length-reach.ts';
import type { SiteReader } from './zone-reader.ts';

const oldestRow = z.object({ zone_id: z.number(), oldest: z.coerce.number() });

/** Age in seconds of the longest stay inside each zone just before a moment; zones without one are left out. */
export async function readOldestInside(
  { tx, organisationId, siteId }: SiteReader,
  zoneIds: readonly number[],
  at: number,
): Promise<Map<number, number>> {
  const moment = sql`${instantValue(at)}::timestamptz`;
  const { rows } = await tx.execute(sql`/* oldest inside */
    select asked.zone_id, extract(epoch from ${moment} - min(found.entered)) as oldest
    from unnest(${sql.param([...zoneIds])}::integer[]) as asked (zone_id)
    cross join (${lengthReaches}) as length_reach
    cross join lateral (
      select entered from zone_stay
      where organisation_id = ${organisationId} and site_id = ${siteId}
        and zone_id = asked.zone_id
        and length_class = class
        and entered < ${moment} and entered >= ${moment} - reach
        and (left_at is null or left_at >= ${moment})
      order by entered
      limit 1
    ) as found
    group by asked.zone_id`);
  return new Map(
    z
      .array(oldestRow)
      .parse(rows)
      .map((row) => [row.zone_id, row.oldest]),
  );
}
