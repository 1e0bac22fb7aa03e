import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { instantValue } from './instant-value.ts';
import { lengthReaches } from './length-reach.ts';
import type { SiteReader } from './zone-reader.ts';

const ageRow = z.object({ age_sum: z.coerce.number() });

/** Σ (at − entered) in seconds over the stays inside a zone just before a moment. */
export async function readAgeInside(
  { tx, organisationId, siteId }: SiteReader,
  zoneId: number,
  at: number,
): Promise<number> {
  const moment = sql`${instantValue(at)}::timestamptz`;
  const { rows } = await tx.execute(sql`/* age inside */
    select coalesce(sum(extract(epoch from ${moment} - found.entered)), 0) as age_sum
    from (${lengthReaches}) as length_reach
    cross join lateral (
      select entered from zone_stay
      where organisation_id = ${organisationId} and site_id = ${siteId} and zone_id = ${zoneId}
        and length_class = class
        and entered < ${moment} and entered >= ${moment} - reach
        and (left_at is null or left_at >= ${moment})
      offset 0
    ) as found`);
  return ageRow.parse(rows[0]).age_sum;
}

/**
 * Mean age of those inside just before the end of each step, in seconds; null where nobody is. While time
 * passes every stay inside ages with it, and whoever leaves takes their flow time along: so the sum of ages
 * at a step's end is that at its start + ∫ level dt − Σ flow times of the step.
 *
 * @param ageSum Σ of ages just before the first step
 * @param steps ∫ level dt in job-seconds, Σ of flow times in seconds, and the level at the end, by step
 */
export function agesByStep(
  ageSum: number,
  steps: readonly { integral: number; flowSum: number; levelEnd: number }[],
): (number | null)[] {
  let sum = ageSum;
  return steps.map(({ integral, flowSum, levelEnd }) => {
    // Nobody inside has no age: rounding does not pile up.
    sum = levelEnd === 0 ? 0 : Math.max(0, sum + integral - flowSum);
    return levelEnd === 0 ? null : sum / levelEnd;
  });
}
