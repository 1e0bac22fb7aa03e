import { sql } from 'drizzle-orm';
import type { RowAccount } from '../../shared/contracts/uploads.ts';
import { countOutcomes } from '../flow/derive/count-outcomes.ts';
import { deriveFromToldRows } from '../flow/derive/derive.ts';
import type { Derivation } from '../flow/derive/derivation.ts';
import { createTouchedJobs, gatherToldRows } from '../flow/derive/told-rows.ts';
import { insertArea } from '../sites/write-areas.ts';
import type { StagedArea } from './pipeline.ts';

/** What reading a file into `staged_row` gave, and for which upload. */
export interface StagedUpload {
  uploadId: number;
  areas: readonly StagedArea[];
  account: RowAccount;
}

/**
 * Takes the staged rows of one upload into the site, in the transaction of the derivation: its areas, its
 * rows as told, and from them records, stays and levels. All of it happens or nothing does.
 *
 * @returns the closed row account
 */
export async function loadStagedRows(
  derivation: Derivation,
  staged: StagedUpload,
): Promise<RowAccount> {
  await addFoundAreas(derivation, staged.areas);
  await keepToldRows(derivation, staged);
  await keepRefusedRows(derivation, staged.uploadId);
  await touchStagedJobs(derivation);
  await gatherToldRows(derivation);
  const outcomes = await countOutcomes(derivation, staged.uploadId);
  await deriveFromToldRows(derivation);
  return { ...staged.account, ...outcomes };
}

/** Makes an area, with its zone and its spelling, of every name that the file brought. */
async function addFoundAreas(derivation: Derivation, areas: readonly StagedArea[]): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  for (const found of areas) {
    // Somebody may have declared the area while the file was being read.
    found.areaId ??= await areaSpelled(derivation, found.folded);
    if (found.areaId !== null) continue;
    found.areaId = await insertArea(derivation, { name: found.name, origin: 'found' });
    await tx.execute(sql`/* found spelling */
      insert into area_spelling (organisation_id, site_id, folded, as_written, area_id, origin)
      values (${organisationId}, ${siteId}, ${found.folded}, ${found.name}, ${found.areaId}, 'found')`);
  }
}

async function areaSpelled(
  { tx, organisationId, siteId }: Derivation,
  folded: string,
): Promise<number | null> {
  const { rows } = await tx.execute(sql`/* area of a spelling */
    select area_id from area_spelling
    where organisation_id = ${organisationId} and site_id = ${siteId} and folded = ${folded}`);
  return rows[0] ? Number(rows[0].area_id) : null;
}

async function keepToldRows(
  { tx, organisationId, siteId }: Derivation,
  { uploadId, areas }: StagedUpload,
): Promise<void> {
  const areaOfNumber = sql`
    select * from unnest(
      ${sql.param(areas.map((area) => area.number))}::integer[],
      ${sql.param(areas.map((area) => area.areaId))}::integer[]
    ) as numbered (area_number, area_id)`;
  await tx.execute(sql`/* told rows of an upload */
    insert into upload_row (
      organisation_id, site_id, job_key, upload_id, line, part, area_id,
      arrived, started, finished,
      record_key, quantity, family, due, priority, work_content, value, resource, status, parent
    )
    select
      ${organisationId}, ${siteId}, job_key, ${uploadId}, line, part, area_id,
      arrived, started, finished,
      record_key, quantity, family, due, priority, work_content, value, resource, status, parent
    from staged_row join (${areaOfNumber}) as numbered using (area_number)
    order by job_key, line, part`);
  await tx.execute(sql`/* what an upload says of each area */
    insert into upload_area (
      organisation_id, site_id, upload_id, area_id,
      rows, first_at, latest_at, speaks_until, has_quantities, has_starts
    )
    select
      ${organisationId}, ${siteId}, ${uploadId}, area_id, count(*),
      min(least(arrived, started, finished)), max(greatest(arrived, started, finished)),
      (select max(greatest(arrived, started, finished)) from staged_row),
      bool_or(quantity is not null), bool_or(started is not null)
    from staged_row join (${areaOfNumber}) as numbered using (area_number)
    group by area_id`);
}

async function keepRefusedRows(
  { tx, organisationId, siteId }: Derivation,
  uploadId: number,
): Promise<void> {
  await tx.execute(sql`/* refused rows */
    insert into refused_row (organisation_id, site_id, upload_id, line, part, reason, detail, raw)
    select ${organisationId}, ${siteId}, ${uploadId}, line, part, reason, detail, raw
    from staged_refused order by line, part`);
}

/** Touches the jobs of the staged rows, and those whose records carry the same record ids. */
async function touchStagedJobs({ tx, organisationId, siteId }: Derivation): Promise<void> {
  await createTouchedJobs(tx);
  await tx.execute(sql`/* touch staged jobs */
    insert into touched_job
    select job_key from staged_row
    union
    select upload_row.job_key
    from upload_row join staged_row using (record_key)
    where organisation_id = ${organisationId} and site_id = ${siteId}`);
  await tx.execute(sql`analyze touched_job`);
}
