import { sql, type SQL } from 'drizzle-orm';
import type { AreaMove } from '../area-moves.ts';
import type { Derivation } from './derivation.ts';
import { areaCounted } from './moved-rows.ts';

/** The moment by which a row lies in a span: its start, else its arrival, else its finish. */
const about = (row: SQL): SQL => sql`coalesce(${row}.started, ${row}.arrived, ${row}.finished)`;

/** Whether another row, or what an upload says of an area, counts for the same area as `told` at its moment. */
const isOfSameArea = (moves: readonly AreaMove[], other: SQL): SQL => {
  const counted = (areaId: SQL) => areaCounted(moves, areaId, about(sql`told`));
  return sql`${counted(sql`${other}.area_id`)} = ${counted(sql`told.area_id`)}`;
};

/**
 * Whether the upload of which `truth` tells is later than the row `told`, is the whole truth for its area
 * over a span in which it lies, and does not carry it, neither by its record id nor by job, area and that
 * moment.
 */
export const isTruthFor = (
  organisationId: number,
  siteId: number,
  moves: readonly AreaMove[],
): SQL => sql`
  truth.organisation_id = ${organisationId} and truth.site_id = ${siteId}
  and ${isOfSameArea(moves, sql`truth`)}
  and truth.upload_id > told.upload_id
  and ${about(sql`told`)} between truth.replaces_from and truth.replaces_until
  and not exists (
    select from upload_row as carried
    where carried.organisation_id = ${organisationId} and carried.site_id = ${siteId}
      and carried.job_key = told.job_key
      and carried.upload_id = truth.upload_id
      and (
        carried.record_key = told.record_key
        or ${isOfSameArea(moves, sql`carried`)}
        and case
          when told.started is not null then carried.started = told.started
          when told.arrived is not null then carried.arrived = told.arrived
          else carried.finished = told.finished
        end
      )
  )`;

/** Whether the row `told` is voided by any upload. */
export const isVoided = (
  organisationId: number,
  siteId: number,
  moves: readonly AreaMove[],
): SQL => sql`
  exists (select from upload_area as truth where ${isTruthFor(organisationId, siteId, moves)})`;

/** Touches the jobs of which an upload that replaces a period voids rows, as long as its areas are known. */
export async function touchJobsOfReplacedPeriod(
  { tx, organisationId, siteId, moves }: Derivation,
  uploadId: number,
): Promise<void> {
  const { rows } = await tx.execute(sql`/* whether an upload replaces a period */
    select exists (
      select from upload_area
      where organisation_id = ${organisationId} and site_id = ${siteId}
        and upload_id = ${uploadId} and replaces_from is not null
    ) as replaces`);
  // Most do not, and the rows of the whole site need not be looked at.
  if (rows[0]?.replaces !== true) return;
  await tx.execute(sql`/* touch jobs of a replaced period */
    insert into touched_job
    select distinct told.job_key
    from upload_row as told join upload_area as truth
      on truth.organisation_id = told.organisation_id
      and truth.site_id = told.site_id
      and ${isOfSameArea(moves, sql`truth`)}
      and truth.upload_id = ${uploadId}
    where told.organisation_id = ${organisationId} and told.site_id = ${siteId}
      and told.upload_id < ${uploadId}
      and ${about(sql`told`)} between truth.replaces_from and truth.replaces_until
    on conflict do nothing`);
}

/** How many rows of before an upload voids: it is the whole truth for their areas and does not carry them. */
export async function countVoided(
  { tx, organisationId, siteId, moves }: Derivation,
  uploadId: number,
): Promise<number> {
  const { rows } = await tx.execute(sql`/* voided rows */
    select count(*) as voided
    from upload_row as told join touched_job using (job_key)
    where told.organisation_id = ${organisationId} and told.site_id = ${siteId}
      and exists (
        select from upload_area as truth
        where truth.upload_id = ${uploadId} and ${isTruthFor(organisationId, siteId, moves)}
      )`);
  return Number(rows[0]?.voided);
}
