import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { PostedFinishes } from '../methods/posting-delay.ts';
import { areaCounted } from './derive/moved-rows.ts';
import { readToldKinds } from './derive/told-rows.ts';
import { readAreaMoves } from './read-area-moves.ts';
import { dayBorders } from './trust-counts.ts';
import type { SiteReader } from './zone-reader.ts';

export interface PostedInArea extends PostedFinishes {
  areaId: number;
}

const postedRow = z
  .object({
    area_id: z.number(),
    day: z.number(),
    upload_id: z.number(),
    finishes: z.coerce.number(),
  })
  .transform((row) => ({
    areaId: row.area_id,
    day: row.day - 1,
    uploadId: row.upload_id,
    finishes: row.finishes,
  }));

/**
 * Finishes by area, local day and the first upload that told them, from the rows as told. Null where the
 * records know it themselves: a record's source is the first row that tells it as it now stands. That does
 * not hold where rows tell single events, of which none tells the whole, nor where an upload replaced what
 * earlier ones had told.
 *
 * @param borders of n local days, n + 1
 */
export async function readPostedFinishes(
  reader: SiteReader,
  borders: readonly number[],
): Promise<PostedInArea[] | null> {
  const kinds = await readToldKinds(reader);
  if (!kinds.events && !kinds.replaced) return null;
  const { tx, organisationId, siteId } = reader;
  const moves = await readAreaMoves(reader);
  const about = sql`coalesce(started, arrived, finished)`;
  const { rows } = await tx.execute(sql`/* finishes by the upload that posted them */
    with counted as (
      select
        ${areaCounted(moves, sql`upload_row.area_id`, about)} as area_id,
        job_key, finished, upload_id
      from upload_row
      where organisation_id = ${organisationId} and site_id = ${siteId} and finished is not null
    ),
    first_told as (
      select area_id, finished, min(upload_id) as upload_id
      from counted group by area_id, job_key, finished
    )
    select
      area_id, width_bucket(finished, ${dayBorders(borders)}) as day, upload_id,
      count(*) as finishes
    from first_told
    where finished >= (${dayBorders(borders)})[1]
    group by 1, 2, 3`);
  return z.array(postedRow).parse(rows);
}
