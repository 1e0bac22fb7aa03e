import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { AreaMove } from './area-moves.ts';
import type { SiteReader } from './zone-reader.ts';

const moveRow = z.object({
  id: z.number(),
  area_id: z.number(),
  target_area_id: z.number(),
  valid_from: z.coerce.date().nullable(),
});

/** The moves of areas that are in force at a site, oldest first. */
export async function readAreaMoves({
  tx,
  organisationId,
  siteId,
}: Pick<SiteReader, 'tx' | 'organisationId' | 'siteId'>): Promise<AreaMove[]> {
  const { rows } = await tx.execute(sql`/* moves of areas */
    select id, area_id, target_area_id, valid_from from area_move
    where organisation_id = ${organisationId} and site_id = ${siteId}
    order by id`);
  return z
    .array(moveRow)
    .parse(rows)
    .map((row) => ({
      id: row.id,
      areaId: row.area_id,
      targetAreaId: row.target_area_id,
      from: row.valid_from?.getTime() ?? -Infinity,
    }));
}
