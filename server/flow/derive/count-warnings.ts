import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { WarningReason } from '../../../shared/row-reasons.ts';
import type { Derivation } from './derivation.ts';

const countsRow = z.object({ reason: z.string(), rows: z.coerce.number() });

/**
 * What only the derived records and the paired events tell of the accepted rows of an upload, by the code of
 * the warning: inferred finishes, stays that overlap, and of events what they lack. Needs `merged_record`
 * and, where there are events, `paired_event`.
 */
export async function countWarnings(
  derivation: Derivation,
  uploadId: number,
): Promise<Partial<Record<WarningReason, number>>> {
  const { tx, organisationId, siteId, told } = derivation;
  const { rows } = await tx.execute(sql`/* warnings of records */
    with noted as materialized (
      select job_key, coalesce(started, arrived, finished) as about, finish_inferred, overlapping
      from merged_record where finish_inferred or overlapping
    ),
    of_upload as (
      select noted.finish_inferred, noted.overlapping
      from noted cross join lateral (
        -- Looked up one by one: there are few, and of a new site the planner knows no counts.
        select from upload_row as told
        where told.organisation_id = ${organisationId} and told.site_id = ${siteId}
          and told.job_key = noted.job_key
          and told.upload_id = ${uploadId}
          and coalesce(told.started, told.arrived, told.finished) = noted.about
        offset 0
      ) as told
    )
    select 'finish-inferred' as reason, count(*) as rows from of_upload where finish_inferred
    union all
    select 'two-stays-at-once', count(*) from of_upload where overlapping`);
  const events = told?.events ? await countOfEvents(derivation, uploadId) : [];
  const counts = [...z.array(countsRow).parse(rows), ...events].filter((count) => count.rows > 0);
  return Object.fromEntries(counts.map((count) => [count.reason, count.rows]));
}

async function countOfEvents(
  { tx }: Derivation,
  uploadId: number,
): Promise<z.infer<typeof countsRow>[]> {
  const { rows } = await tx.execute(sql`/* warnings of events */
    with lacking as (
      select
        case
          when event <> 'finished' and pair is null then 'no-finish'
          when event = 'finished' and pair = 'arrived' then 'no-start'
          when event = 'finished' and pair is null then 'finish-without-start'
        end as reason
      from paired_event where upload_id = ${uploadId}
    )
    select reason, count(*) as rows from lacking where reason is not null group by reason`);
  return z.array(countsRow).parse(rows);
}
