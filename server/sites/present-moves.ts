import { asc, eq, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import { z } from 'zod';
import type { AreaMove } from '../../shared/contracts/areas.ts';
import { person } from '../db/schema/people.ts';
import { areaMove, zone } from '../db/schema/zones.ts';
import { moveInForce, type AreaMove as Move } from '../flow/area-moves.ts';
import { toldAreas } from '../flow/derive/moved-rows.ts';
import { ofSite, type SiteWriter } from './site-writer.ts';

/** The moves of a site as they are answered, oldest first, with the rows that each takes. */
export async function presentMoves(site: SiteWriter, moves: readonly Move[]): Promise<AreaMove[]> {
  if (moves.length === 0) return [];
  const rowsOf = await countMovedRows(site, moves);
  return (await selectMoves(site)).map(({ move, areaName, targetAreaName, movedBy }) => ({
    id: move.id,
    areaId: move.areaId,
    areaName,
    targetAreaId: move.targetAreaId,
    targetAreaName,
    from: move.validFrom?.toISOString() ?? null,
    rows: rowsOf.get(move.id) ?? 0,
    movedBy,
    movedAt: move.movedAt.toISOString(),
  }));
}

function selectMoves(site: SiteWriter) {
  const [source, target] = [alias(zone, 'source'), alias(zone, 'target')];
  return site.tx
    .select({
      move: areaMove,
      areaName: source.name,
      targetAreaName: target.name,
      movedBy: person.name,
    })
    .from(areaMove)
    .innerJoin(source, eq(source.id, areaMove.areaId))
    .innerJoin(target, eq(target.id, areaMove.targetAreaId))
    .leftJoin(person, eq(person.id, areaMove.movedBy))
    .where(ofSite(site, areaMove))
    .orderBy(asc(areaMove.id));
}

const countRow = z.object({
  told_area_id: z.number(),
  counts_from: z.coerce.date().nullable(),
  rows: z.coerce.number(),
});

/** How many rows each move takes from its area, by the move's id. */
async function countMovedRows(
  { tx, organisationId, siteId }: SiteWriter,
  moves: readonly Move[],
): Promise<Map<number, number>> {
  const { rows } = await tx.execute(sql`/* rows of moves */
    with ${toldAreas({ organisationId, siteId, moves })}
    select
      told_area_id, case when isfinite(counts_from) then counts_from end as counts_from,
      sum(rows) as rows
    from told_area group by 1, 2`);
  const found = new Map<number, number>();
  for (const row of z.array(countRow).parse(rows)) {
    const from = row.counts_from?.getTime() ?? -Infinity;
    const move = moveInForce(moves, row.told_area_id, from);
    if (move) found.set(move.id, (found.get(move.id) ?? 0) + row.rows);
  }
  return found;
}
