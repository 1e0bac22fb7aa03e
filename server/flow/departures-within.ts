import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { instantValue } from './instant-value.ts';
import { lengthReaches } from './length-reach.ts';
import type { Period, SiteReader } from './zone-reader.ts';

const seconds = z.coerce.number().nullable();
const departureRow = z.object({
  job_key: z.string(),
  entered: z.coerce.date(),
  started: z.coerce.date().nullable(),
  left_at: z.coerce.date(),
  queue_seconds: seconds,
  process_seconds: seconds,
  flow_seconds: z.coerce.number(),
  finish_inferred: z.boolean(),
  upload_id: z.number(),
  line: z.number(),
});
export type DepartureRow = z.infer<typeof departureRow>;

/** The stays that left a zone within a period, latest first. */
export async function readDeparturesWithin(
  { tx, organisationId, siteId }: SiteReader,
  zoneId: number,
  period: Period,
  limit: number,
): Promise<DepartureRow[]> {
  const from = sql`${instantValue(period.from)}::timestamptz`;
  const to = sql`${instantValue(period.to)}::timestamptz`;
  const { rows } = await tx.execute(sql`/* departures within */
    select
      found.job_key, found.entered, found.started, found.left_at,
      found.queue_microseconds / 1000000.0 as queue_seconds,
      found.process_microseconds / 1000000.0 as process_seconds,
      extract(epoch from found.left_at - found.entered) as flow_seconds,
      found.finish_inferred, found.upload_id, found.line
    from (${lengthReaches}) as length_reach
    cross join lateral (
      select * from zone_stay
      where organisation_id = ${organisationId} and site_id = ${siteId} and zone_id = ${zoneId}
        and length_class = class and class <> 99
        and entered < ${to} and entered >= ${from} - reach
        and left_at >= ${from} and left_at < ${to}
      order by left_at desc, job_key, ordinal
      limit ${limit}
    ) as found
    order by found.left_at desc, found.job_key, found.ordinal
    limit ${limit}`);
  return z.array(departureRow).parse(rows);
}
