import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { Derivation } from './derivation.ts';
import { dayGrid, type DayGrid } from './local-grid.ts';

const spanRow = z.object({ first: z.coerce.date().nullable(), last: z.coerce.date().nullable() });

/** Local days that cover every hour of the site; null where there is none. */
export async function gridOfHours({
  tx,
  rules,
  organisationId,
  siteId,
}: Derivation): Promise<DayGrid | null> {
  const { rows } = await tx.execute(sql`/* span of hours */
    select min(hour) as first, max(hour) as last from level_hour
    where organisation_id = ${organisationId} and site_id = ${siteId}`);
  return gridOver(rules, rows[0]);
}

/** Local days that cover every touched hour; null where there is none. */
export async function gridOfTouchedHours({ tx, rules }: Derivation): Promise<DayGrid | null> {
  const { rows } = await tx.execute(
    sql`/* span of touched hours */ select min(hour) as first, max(hour) as last from touched_hour`,
  );
  return gridOver(rules, rows[0]);
}

function gridOver(rules: Derivation['rules'], row: unknown): DayGrid | null {
  const { first, last } = spanRow.parse(row);
  return first && last ? dayGrid(rules, first.getTime(), last.getTime() + 1) : null;
}
