import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { instantValue } from './instant-value.ts';
import type { SiteReader } from './zone-reader.ts';

/** How many of the departures were no good ones, in the unit asked for. */
export interface Endings {
  scrapped: number;
  cancelled: number;
}
export const noEndings: Endings = { scrapped: 0, cancelled: 0 };

const endingRow = z.object({
  step: z.number(),
  scrapped: z.coerce.number(),
  cancelled: z.coerce.number(),
});

/**
 * Of the departures of a zone, those by scrapping and by cancelling, for each step between two borders.
 *
 * @param borders milliseconds, ascending; steps are half-open
 */
export async function readEndingsByStep(
  { tx, organisationId, siteId }: SiteReader,
  zoneId: number,
  borders: readonly number[],
  unit: 'jobs' | 'units',
): Promise<Endings[]> {
  const steps = Math.max(0, borders.length - 1);
  const [from = 0, to = 0] = [borders[0], borders.at(-1)];
  const weight = unit === 'units' ? sql`coalesce(quantity, 1)` : sql`1`;
  const { rows } = await tx.execute(sql`/* endings by step */
    select
      width_bucket(left_at, ${sql.param(borders.map(instantValue))}::timestamptz[]) - 1 as step,
      coalesce(sum(${weight}) filter (where ending = 'scrapped'), 0) as scrapped,
      coalesce(sum(${weight}) filter (where ending = 'cancelled'), 0) as cancelled
    from zone_stay
    where organisation_id = ${organisationId} and site_id = ${siteId} and zone_id = ${zoneId}
      and ending is not null
      and left_at >= ${instantValue(from)}::timestamptz and left_at < ${instantValue(to)}::timestamptz
    group by step`);
  const found = new Map(
    z
      .array(endingRow)
      .parse(rows)
      .map((row) => [row.step, row]),
  );
  return Array.from({ length: steps }, (_, step) => found.get(step) ?? noEndings).map(
    ({ scrapped, cancelled }) => ({ scrapped, cancelled }),
  );
}
