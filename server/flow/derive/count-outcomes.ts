import { sql, type SQL } from 'drizzle-orm';
import { z } from 'zod';
import type { Derivation } from './derivation.ts';

const columns = [
  'job_key',
  'area_id',
  'arrived',
  'started',
  'finished',
  'quantity',
  'family',
  'due',
  'priority',
  'work_content',
  'value',
  'resource',
  'status',
  'ending',
  'parent',
] as const;

const outcomeRow = z.object({
  new: z.coerce.number(),
  same: z.coerce.number(),
  completing: z.coerce.number(),
  correcting: z.coerce.number(),
});
export type OutcomeCounts = z.infer<typeof outcomeRow>;

const joined = (parts: SQL[], by: SQL): SQL => sql.join(parts, by);
const each = (of: (column: SQL) => SQL, by: SQL): SQL =>
  joined(
    columns.map((column) => of(sql`${sql.identifier(column)}`)),
    by,
  );

/**
 * What the rows of one upload did to the records: the first row of a record is new; a later one corrects
 * where it gives another value than was given last, completes where it gives what was blank, and is the
 * same otherwise. Of events, those of a record that the upload itself brought are new: each tells a part of
 * it. Needs `told_row`.
 */
export async function countOutcomes(
  { tx, organisationId, siteId }: Derivation,
  uploadId: number,
): Promise<OutcomeCounts> {
  const record = sql`first_upload, first_line, first_part`;
  const { rows } = await tx.execute(sql`/* count outcomes */
    with repeated as (
      select
        told_row.*,
        (${each((column) => column, sql`, `)}) is not distinct from (
          ${each((column) => sql`lag(${column}) over in_order`, sql`, `)}
        ) as repeats
      from told_row
      window in_order as (partition by ${record} order by version)
    ),
    telling as (
      -- Only records of which a row of this upload says something else than the row before it.
      select distinct ${record} from repeated
      where upload_id = ${uploadId} and version > 1 and not repeats
    ),
    compared as (
      select
        repeated.upload_id, repeated.version,
        event is not null and repeated.upload_id = first_upload as begins,
        ${each(
          (column) => sql`${column} is not null and ${column} is distinct from lag(${column}) over (
            partition by ${record}, ${column} is null order by version
          ) and lag(${column}) over (
            partition by ${record}, ${column} is null order by version
          ) is not null`,
          sql` or `,
        )} as corrects,
        ${each(
          (column) => sql`${column} is not null and lag(${column}) over (
            partition by ${record}, ${column} is null order by version
          ) is null`,
          sql` or `,
        )} as completes
      from repeated join telling using (${record})
    ),
    told as (
      select
        (
          select count(*) from upload_row
          where organisation_id = ${organisationId} and site_id = ${siteId}
            and upload_id = ${uploadId}
        ) as total,
        (
          select count(*) from told_row where upload_id = ${uploadId} and version > 1
        ) as retelling
    ),
    judged as (
      select
        count(*) filter (where corrects) as correcting,
        count(*) filter (where completes and not corrects and not begins) as completing,
        count(*) filter (where completes and not corrects and begins) as beginning
      from compared where upload_id = ${uploadId} and version > 1
    )
    select
      total - retelling + beginning as new, completing, correcting,
      retelling - beginning - completing - correcting as same
    from told cross join judged`);
  return outcomeRow.parse(rows[0]);
}
