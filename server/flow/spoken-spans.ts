import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { toldAreas } from './derive/moved-rows.ts';
import { readAreaMoves } from './read-area-moves.ts';
import type { SiteReader } from './zone-reader.ts';

/** Over which span an upload speaks for an area, in milliseconds; both ends belong to it. */
export interface SpokenSpan {
  areaId: number;
  uploadId: number;
  /** First accepted time anywhere in the upload, and the last. */
  from: number;
  until: number;
  /** First and latest accepted time of the area itself. */
  ownFrom: number;
  ownUntil: number;
}

const spanRow = z.object({
  area_id: z.number(),
  upload_id: z.number(),
  speaks_from: z.coerce.date(),
  speaks_until: z.coerce.date(),
  first_at: z.coerce.date(),
  latest_at: z.coerce.date(),
});

/** The spans of all uploads that count, in order of receipt, under the areas for which their rows count. */
export async function readSpokenSpans(reader: SiteReader): Promise<SpokenSpan[]> {
  const { tx, organisationId, siteId } = reader;
  const moves = await readAreaMoves(reader);
  const { rows } = await tx.execute(sql`/* spans for which uploads speak */
    with ${toldAreas({ organisationId, siteId, moves })}
    select
      area_id, upload_id, first_at, latest_at, speaks_until,
      min(first_at) over (partition by upload_id) as speaks_from
    from told_area
    order by upload_id, area_id`);
  return z
    .array(spanRow)
    .parse(rows)
    .map((row) => ({
      areaId: row.area_id,
      uploadId: row.upload_id,
      from: row.speaks_from.getTime(),
      until: row.speaks_until.getTime(),
      ownFrom: row.first_at.getTime(),
      ownUntil: row.latest_at.getTime(),
    }));
}
