import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { AreaGaps } from '../methods/clock-offset.ts';
import { instantValue } from './instant-value.ts';
import type { SiteReader } from './zone-reader.ts';

const gapRow = z.object({
  before_id: z.number(),
  after_id: z.number(),
  pairs: z.coerce.number(),
  negative: z.coerce.number(),
  quantiles: z.tuple([z.number(), z.number(), z.number(), z.number()]),
});

/**
 * Gaps from a recorded finish to the arrival (else start) of the job's next record at another area, in the
 * same pass, over pairs of areas in which some are negative; of finishes from a moment on.
 */
export async function readGapsBetweenAreas(
  { tx, organisationId, siteId }: SiteReader,
  since: number,
): Promise<AreaGaps[]> {
  const { rows } = await tx.execute(sql`/* gaps between areas */
    with lately as (
      -- What follows a late finish has a late finish too, or none yet.
      select
        area_id, pass, ordinal, finished,
        lead(area_id) over in_order as next_area_id,
        lead(pass) over in_order as next_pass,
        lead(ordinal) over in_order as next_ordinal,
        lead(coalesce(arrived, started)) over in_order as next_came
      from record
      where organisation_id = ${organisationId} and site_id = ${siteId}
        and (finished is null or finished >= ${instantValue(since)}::timestamptz)
      window in_order as (partition by job_key order by ordinal)
    ),
    gap as (
      select
        area_id as before_id,
        next_area_id as after_id,
        extract(epoch from next_came - finished)::double precision as seconds
      from lately
      where next_ordinal = ordinal + 1 and next_pass = pass and next_area_id <> area_id
        and finished is not null and next_came is not null
    )
    select
      before_id, after_id, count(*) as pairs,
      count(*) filter (where seconds < 0) as negative,
      percentile_cont(array[0.05, 0.25, 0.5, 0.75]) within group (order by seconds)
        filter (where seconds < 0) as quantiles
    from gap group by before_id, after_id
    having count(*) filter (where seconds < 0) > 0
    order by before_id, after_id`);
  return z
    .array(gapRow)
    .parse(rows)
    .map(({ before_id, after_id, pairs, negative, quantiles }) => {
      const [q05, q25, q50, q75] = quantiles;
      return { beforeId: before_id, afterId: after_id, pairs, negative, q05, q25, q50, q75 };
    });
}
