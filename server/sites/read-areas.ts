import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { Area, Areas } from '../../shared/contracts/areas.ts';
import type { Transaction } from '../db/client.ts';
import type { AreaMove as Move } from '../flow/area-moves.ts';
import { toldAreas } from '../flow/derive/moved-rows.ts';
import { readAreaMoves } from '../flow/read-area-moves.ts';
import { beginning } from './declare-servers.ts';
import { readLikelyPairs } from './likely-pairs.ts';
import { presentMoves } from './present-moves.ts';
import type { SiteWriter } from './site-writer.ts';

const date = z.coerce.date().nullable();

const areaRow = z.object({
  id: z.number(),
  name: z.string(),
  position: z.number(),
  servers: z.coerce.number().nullable(),
  servers_from: date,
  spellings: z.array(z.string()),
  told_rows: z.coerce.number(),
  rows: z.coerce.number(),
  first_at: date,
  latest_at: date,
});

/** The areas of a site with how files write them and what was told of them, the moves, and likely pairs. */
export async function readAreasOf(
  tx: Transaction,
  organisationId: number,
  siteId: number,
): Promise<Areas> {
  const site = { tx, organisationId, siteId };
  const moves = await readAreaMoves(site);
  const merged = new Map(
    moves.filter((move) => move.from === -Infinity).map((move) => [move.areaId, move.targetAreaId]),
  );
  const areas = (await readRows(site, moves)).map((row) => presentArea(row, merged));
  const visible = areas.filter((area) => area.mergedInto === null);
  return {
    areas,
    moves: await presentMoves(site, moves),
    likelyPairs: await readLikelyPairs(site, visible),
  };
}

async function readRows(
  { tx, organisationId, siteId }: SiteWriter,
  moves: readonly Move[],
): Promise<z.infer<typeof areaRow>[]> {
  const { rows } = await tx.execute(sql`/* areas of a site */
    with ${toldAreas({ organisationId, siteId, moves })},
    told as (
      select told_area_id, sum(rows) as told_rows from told_area group by told_area_id
    ),
    counted as (
      select area_id, sum(rows) as rows, min(first_at) as first_at, max(latest_at) as latest_at
      from told_area group by area_id
    )
    select
      area.id, zone.name, area.position,
      latest_servers.amount as servers, latest_servers.valid_from as servers_from,
      coalesce(
        (
          select array_agg(as_written order by origin, as_written)
          from area_spelling
          where area_spelling.organisation_id = ${organisationId}
            and area_spelling.site_id = ${siteId}
            and area_spelling.area_id = area.id
        ),
        '{}'
      ) as spellings,
      coalesce(told.told_rows, 0) as told_rows, coalesce(counted.rows, 0) as rows,
      counted.first_at, counted.latest_at
    from area join zone
      on zone.organisation_id = area.organisation_id
      and zone.site_id = area.site_id
      and zone.id = area.id
    left join told on told.told_area_id = area.id
    left join counted on counted.area_id = area.id
    left join lateral (
      select amount, valid_from from zone_fact
      where zone_fact.organisation_id = ${organisationId} and zone_fact.site_id = ${siteId}
        and zone_fact.zone_id = area.id and zone_fact.kind = 'servers'
      order by valid_from desc limit 1
    ) as latest_servers on true
    where area.organisation_id = ${organisationId} and area.site_id = ${siteId}
    order by area.position, zone.name, area.id`);
  return z.array(areaRow).parse(rows);
}

function presentArea(row: z.infer<typeof areaRow>, merged: ReadonlyMap<number, number>): Area {
  const since = row.servers_from?.getTime() ?? beginning.getTime();
  return {
    id: row.id,
    name: row.name,
    position: row.position,
    servers: row.servers,
    serversFrom: since === beginning.getTime() ? null : new Date(since).toISOString(),
    spellings: row.spellings,
    toldRows: row.told_rows,
    rows: row.rows,
    firstAt: row.first_at?.toISOString() ?? null,
    latestAt: row.latest_at?.toISOString() ?? null,
    mergedInto: merged.get(row.id) ?? null,
  };
}
