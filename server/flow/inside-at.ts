import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { instantValue } from './instant-value.ts';
import { lengthReaches } from './length-reach.ts';
import type { SiteReader } from './zone-reader.ts';

const seconds = z.coerce.number().nullable();
const insideRow = z.object({
  job_key: z.string(),
  ordinal: z.number(),
  entered: z.coerce.date(),
  /** The moment of entry in full, for the place in the list. */
  entered_at: z.string(),
  started: z.coerce.date().nullable(),
  left_at: z.coerce.date().nullable(),
  queue_seconds: seconds,
  process_seconds: seconds,
  age_seconds: z.coerce.number(),
  finish_inferred: z.boolean(),
  upload_id: z.number(),
  line: z.number(),
});
export type InsideRow = z.infer<typeof insideRow>;

/** A place in the list: the last row that was read. */
export interface InsidePlace {
  enteredAt: string;
  jobKey: string;
  ordinal: number;
}

/** The stays inside a zone at a moment, longest first, from a place in the list on. */
export async function readInsideAt(
  { tx, organisationId, siteId }: SiteReader,
  zoneId: number,
  at: number,
  limit: number,
  after: InsidePlace | null,
): Promise<InsideRow[]> {
  const moment = sql`${instantValue(at)}::timestamptz`;
  const further = after
    ? sql`and entered >= ${after.enteredAt}::timestamptz
        and (entered, job_key, ordinal) > (
          ${after.enteredAt}::timestamptz, ${after.jobKey}, ${after.ordinal}::integer
        )`
    : sql``;
  const { rows } = await tx.execute(sql`/* inside at */
    select
      found.job_key, found.ordinal, found.entered, found.entered::text as entered_at,
      found.started, found.left_at, found.queue_microseconds / 1000000.0 as queue_seconds,
      found.process_microseconds / 1000000.0 as process_seconds,
      extract(epoch from ${moment} - found.entered) as age_seconds,
      found.finish_inferred, found.upload_id, found.line
    from (${lengthReaches}) as length_reach
    cross join lateral (
      select * from zone_stay
      where organisation_id = ${organisationId} and site_id = ${siteId} and zone_id = ${zoneId}
        and length_class = class
        and entered <= ${moment} and entered >= ${moment} - reach
        and (left_at is null or left_at > ${moment})
        ${further}
      order by entered, job_key, ordinal
      limit ${limit}
    ) as found
    order by found.entered, found.job_key, found.ordinal
    limit ${limit}`);
  return z.array(insideRow).parse(rows);
}
