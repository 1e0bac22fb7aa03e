import { sql } from 'drizzle-orm';
import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import type { RowAccount } from '../../shared/contracts/uploads.ts';
import { countOutcomes } from '../flow/derive/count-outcomes.ts';
import { countWarnings } from '../flow/derive/count-warnings.ts';
import { deriveFromToldRows } from '../flow/derive/derive.ts';
import type { Derivation } from '../flow/derive/derivation.ts';
import { createTouchedJobs, gatherToldRows } from '../flow/derive/told-rows.ts';
import { countVoided, touchJobsOfReplacedPeriod } from '../flow/derive/voided-rows.ts';
import { insertArea } from '../sites/write-areas.ts';
import type { StagedArea } from './pipeline.ts';
import { removeUnheardAreas, takeRowsOut } from './withdraw.ts';

/** What reading a file into `staged_row` gave, and for which upload. */
export interface StagedUpload {
  uploadId: number;
  areas: readonly StagedArea[];
  account: RowAccount;
  plan: ColumnPlan;
  /** Whether rows of an earlier reading of the same file stand; they make way. */
  isAgain: boolean;
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
  const { uploadId, account } = staged;
  await createTouchedJobs(derivation.tx);
  if (staged.isAgain) await takeReadingOut(derivation, uploadId);
  await addFoundAreas(derivation, staged.areas);
  await keepToldRows(derivation, staged);
  await keepAreasToldOf(derivation, staged);
  await keepRefusedRows(derivation, uploadId);
  await touchStagedJobs(derivation);
  await touchJobsOfReplacedPeriod(derivation, uploadId);
  await gatherToldRows(derivation);
  const outcomes = await countOutcomes(derivation, uploadId);
  const voided = derivation.told?.replaced ? await countVoided(derivation, uploadId) : 0;
  await deriveFromToldRows(derivation);
  const warnings = { ...account.warnings, ...(await countWarnings(derivation, uploadId)) };
  if (staged.isAgain) await removeUnheardAreas(derivation);
  return { ...account, ...outcomes, warnings, voided };
}

/** Takes out what an earlier reading of the file made of it. */
async function takeReadingOut(derivation: Derivation, uploadId: number): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  await takeRowsOut(derivation, uploadId);
  await tx.execute(sql`/* forget refused rows */
    delete from refused_row
    where organisation_id = ${organisationId} and site_id = ${siteId} and upload_id = ${uploadId}`);
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
  await tx.execute(sql`/* told rows of an upload */
    insert into upload_row (
      organisation_id, site_id, job_key, upload_id, line, part, area_id,
      event, arrived, started, finished, second_reading,
      record_key, quantity, family, due, priority, work_content, value, resource, status, ending, parent
    )
    select
      ${organisationId}, ${siteId}, job_key, ${uploadId}, line, part, area_id,
      event, arrived, started, finished, second_reading,
      record_key, quantity, family, due, priority, work_content, value, resource, status, ending, parent
    from staged_row join (${areaOfNumber(areas)}) as numbered using (area_number)
    order by job_key, line, part`);
}

const areaOfNumber = (areas: readonly StagedArea[]) => sql`
  select * from unnest(
    ${sql.param(areas.map((area) => area.number))}::integer[],
    ${sql.param(areas.map((area) => area.areaId))}::integer[]
  ) as numbered (area_number, area_id)`;

/** For which areas an upload speaks, and, where it replaces a period, over which span it is the whole truth. */
async function keepAreasToldOf(
  { tx, organisationId, siteId }: Derivation,
  { uploadId, areas, plan }: StagedUpload,
): Promise<void> {
  await tx.execute(sql`/* what an upload says of each area */
    insert into upload_area (
      organisation_id, site_id, upload_id, area_id,
      rows, first_at, latest_at, speaks_until, has_quantities, has_starts,
      replaces_from, replaces_until
    )
    with span as (
      select
        min(least(arrived, started, finished)) as begins,
        max(greatest(arrived, started, finished)) as ends
      from staged_row
    )
    select
      ${organisationId}, ${siteId}, ${uploadId}, area_id, count(*),
      min(least(arrived, started, finished)), max(greatest(arrived, started, finished)),
      (select ends from span),
      bool_or(quantity is not null), bool_or(started is not null),
      case when ${plan.mode === 'replace-period'}::boolean then (select begins from span) end,
      case when ${plan.mode === 'replace-period'}::boolean then (select ends from span) end
    from staged_row join (${areaOfNumber(areas)}) as numbered using (area_number)
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
  await tx.execute(sql`/* touch staged jobs */
    insert into touched_job
    select job_key from staged_row
    union
    select upload_row.job_key
    from upload_row join staged_row using (record_key)
    where organisation_id = ${organisationId} and site_id = ${siteId}
    on conflict do nothing`);
  await tx.execute(sql`analyze touched_job`);
}
