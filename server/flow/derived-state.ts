import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { Transaction } from '../db/client.ts';

const stateRow = z.object({ table: z.string(), rows: z.coerce.number(), digest: z.string() });

/** One derived table of a site: how many rows, and a digest over all of them in order. */
export type DerivedState = z.infer<typeof stateRow>;

const tables = [
  'record',
  'stay',
  'level_hour',
  'level_day',
  'flow_day',
  'flow_month',
  'zone',
] as const;

/**
 * The whole derived state of a site, as digests: two states are equal exactly if every derived row is.
 * Numbers are compared by value, so trailing zeros do not count.
 */
export async function readDerived(
  tx: Transaction,
  organisationId: number,
  siteId: number,
): Promise<DerivedState[]> {
  const states: DerivedState[] = [];
  for (const table of tables) {
    const { rows } = await tx.execute(sql`/* derived state */
      with canonical as (
        select md5(
          regexp_replace(to_jsonb(derived)::text, '(\\.\\d*?)0+(?=[,}\\]])', '\\1', 'g')
        ) as digest
        from ${sql.identifier(table)} as derived
        where organisation_id = ${organisationId} and site_id = ${siteId}
      )
      select
        ${table} as table, count(*) as rows,
        md5(coalesce(string_agg(digest, '' order by digest), '')) as digest
      from canonical`);
    states.push(stateRow.parse(rows[0]));
  }
  return states;
}
