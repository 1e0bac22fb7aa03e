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

/** Removes areas that were found in files of which none is left, unless a person made something of them. */
export async function removeUnheardAreas({
  tx,
  organisationId,
  siteId,
}: Derivation): Promise<void> {
  await tx.execute(sql`/* remove unheard areas */
    delete from zone using area
    where zone.organisation_id = ${organisationId} and zone.site_id = ${siteId}
      and area.organisation_id = zone.organisation_id
      and area.site_id = zone.site_id
      and area.id = zone.id
      and area.origin = 'found'
      and not exists (
        select from upload_area
        where upload_area.organisation_id = ${organisationId} and upload_area.site_id = ${siteId}
          and upload_area.area_id = area.id
      )
      and not exists (
        select from zone_area
        where zone_area.organisation_id = ${organisationId} and zone_area.site_id = ${siteId}
          and zone_area.area_id = area.id
      )
      and not exists (
        select from zone_fact
        where zone_fact.organisation_id = ${organisationId} and zone_fact.site_id = ${siteId}
          and zone_fact.zone_id = area.id
      )
      and not exists (
        select from cap
        where cap.organisation_id = ${organisationId} and cap.site_id = ${siteId}
          and cap.zone_id = area.id
      )`);
}
