import { sql } from 'drizzle-orm';
import { deriveTouchedJobs } from '../flow/derive/derive.ts';
import type { Derivation } from '../flow/derive/derivation.ts';
import { createTouchedJobs } from '../flow/derive/told-rows.ts';
import { touchJobsOfReplacedPeriod } from '../flow/derive/voided-rows.ts';

/**
 * Takes an upload's rows out of the site, in the transaction of the derivation: what other uploads said
 * of the same records holds again, and areas that only this upload named are gone. The upload itself, its
 * original and its account stay.
 */
export async function withdrawRows(derivation: Derivation, uploadId: number): Promise<void> {
  await createTouchedJobs(derivation.tx);
  await takeRowsOut(derivation, uploadId);
  await deriveTouchedJobs(derivation);
  await removeUnheardAreas(derivation);
}

/** Takes an upload's rows out and adds the jobs of which they told, or which they kept silent, to `touched_job`. */
export async function takeRowsOut(derivation: Derivation, uploadId: number): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  const ofUpload = sql`organisation_id = ${organisationId} and site_id = ${siteId}
    and upload_id = ${uploadId}`;
  await touchJobsOfReplacedPeriod(derivation, uploadId);
  await tx.execute(sql`/* touch jobs of an upload */
    insert into touched_job
    with withdrawn as (select job_key, record_key from upload_row where ${ofUpload})
    select job_key from withdrawn
    union
    select upload_row.job_key from upload_row join withdrawn using (record_key)
    where organisation_id = ${organisationId} and site_id = ${siteId}
    on conflict do nothing`);
  await tx.execute(sql`analyze touched_job`);
  await tx.execute(sql`/* withdraw rows */ delete from upload_row where ${ofUpload}`);
  await tx.execute(sql`/* withdraw areas */ delete from upload_area where ${ofUpload}`);
}

/**
 * Removes areas that were found in files of which none is left, unless a person made something of them: put
 * them into a loop, declared a number of servers or a cap, or moved to them rows of an area that stays. With
 * an area go its own moves, which move nothing any more.
 */
export async function removeUnheardAreas({
  tx,
  organisationId,
  siteId,
}: Derivation): Promise<void> {
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  const { rows } = await tx.execute(sql`/* unheard areas */
    with recursive kept as (
      select id from area
      where ${ofSite} and (
        origin <> 'found'
        or id in (select area_id from upload_area where ${ofSite})
        or id in (select area_id from zone_area where ${ofSite})
        or id in (select zone_id from zone_fact where ${ofSite})
        or id in (select zone_id from cap where ${ofSite})
      )
      union
      select target_area_id from area_move join kept on kept.id = area_id where ${ofSite}
    )
    select id from area where ${ofSite} and id not in (select id from kept)`);
  if (rows.length === 0) return;
  const unheard = sql`any(${sql.param(rows.map((row) => row.id))}::integer[])`;
  // Two such areas may be moved to one another: the moves go first.
  await tx.execute(sql`/* remove moves of unheard areas */
    delete from area_move where ${ofSite} and area_id = ${unheard}`);
  await tx.execute(sql`/* remove unheard areas */
    delete from zone where ${ofSite} and id = ${unheard}`);
}
