import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { Period, SiteReader } from './zone-reader.ts';

const factRow = z.object({ valid_from: z.coerce.date(), amount: z.coerce.number() });

/**
 * ∫ servers dt over a period, in server-seconds, from the dated declarations of a zone; null where none
 * held at the period's start.
 */
export async function readServerSeconds(
  { tx, organisationId, siteId }: SiteReader,
  zoneId: number,
  period: Period,
): Promise<number | null> {
  const { rows } = await tx.execute(sql`/* servers over time */
    select valid_from, amount from zone_fact
    where organisation_id = ${organisationId} and site_id = ${siteId}
      and zone_id = ${zoneId} and kind = 'servers'
    order by valid_from`);
  const facts = z.array(factRow).parse(rows);
  const [first] = facts;
  if (!first || first.valid_from.getTime() > period.from) return null;
  return facts.reduce((sum, fact, index) => {
    const from = Math.max(period.from, fact.valid_from.getTime());
    const to = Math.min(period.to, facts[index + 1]?.valid_from.getTime() ?? Infinity);
    return to > from ? sum + (fact.amount * (to - from)) / 1000 : sum;
  }, 0);
}
