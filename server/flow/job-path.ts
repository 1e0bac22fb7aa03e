import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { ToldSource } from './derive/derivation.ts';
import { createTouchedJobs, gatherToldRows, keyedRows } from './derive/told-rows.ts';
import { isTruthFor } from './derive/voided-rows.ts';
import { readAreaMoves } from './read-area-moves.ts';
import type { SiteReader } from './zone-reader.ts';

const date = z.coerce.date().nullable();
const seconds = z.coerce.number().nullable();

const text = z.string().nullable();
const amount = z.coerce.number().nullable();

/** What a row may tell of a record. */
const toldFields = {
  arrived: date,
  started: date,
  finished: date,
  quantity: amount,
  family: text,
  due: date,
  priority: text,
  work_content: amount,
  value: amount,
  resource: text,
  status: text,
  ending: z.enum(['scrapped', 'cancelled']).nullable(),
  parent: text,
};

const recordRow = z.object({
  ordinal: z.number(),
  area_id: z.number(),
  area_name: z.string(),
  pass: z.number(),
  entered: date,
  left_at: date,
  finish_inferred: z.boolean(),
  queue_seconds: seconds,
  process_seconds: seconds,
  flow_seconds: seconds,
  record_key: text,
  ...toldFields,
  upload_id: z.number(),
  line: z.number(),
});
export type RecordRow = z.infer<typeof recordRow>;

/** The records of a job in order. */
export async function readJobRecords(
  { tx, organisationId, siteId }: SiteReader,
  jobKey: string,
): Promise<RecordRow[]> {
  const { rows } = await tx.execute(sql`/* job records */
    select
      record.*, zone.name as area_name,
      extract(epoch from started - entered) as queue_seconds,
      case when not finish_inferred then extract(epoch from left_at - started) end as process_seconds,
      extract(epoch from left_at - entered) as flow_seconds
    from record join zone
      on zone.organisation_id = record.organisation_id
      and zone.site_id = record.site_id
      and zone.id = record.area_id
    where record.organisation_id = ${organisationId} and record.site_id = ${siteId}
      and job_key = ${jobKey}
    order by ordinal`);
  return z.array(recordRow).parse(rows);
}

const toldRow = z.object({
  upload_id: z.number(),
  line: z.number(),
  part: z.number(),
  file_name: z.string(),
  job_key: z.string(),
  area_id: z.number(),
  record_key: text,
  event: z.enum(['arrived', 'started', 'finished']).nullable(),
  /** With the area, what tells the record apart where the row has no record id. */
  about: z.coerce.date(),
  ...toldFields,
});
export type ToldRow = z.infer<typeof toldRow>;

/** Every row that told of a job's records, in order of receipt: also rows that told one under another job. */
export async function readToldRows(
  { tx, organisationId, siteId }: SiteReader,
  jobKey: string,
): Promise<ToldRow[]> {
  const ofSite = sql`organisation_id = ${organisationId} and site_id = ${siteId}`;
  const moves = await readAreaMoves({ tx, organisationId, siteId });
  const source: ToldSource = { tx, organisationId, siteId, moves };
  await createTouchedJobs(tx);
  await tx.execute(sql`/* touch a job */
    insert into touched_job
    select ${jobKey}
    union
    select other.job_key
    from upload_row as told join upload_row as other using (organisation_id, site_id, record_key)
    where ${ofSite} and told.job_key = ${jobKey}`);
  await gatherToldRows(source);
  const { rows } = await tx.execute(sql`/* rows of a job */
    with ${keyedRows(source)}
    select keyed.*, file_name
    from keyed join upload
      on upload.organisation_id = ${organisationId}
      and upload.site_id = ${siteId}
      and upload.id = keyed.upload_id
    where keyed.job_key = ${jobKey} or keyed.record_key is not null
    order by upload_id, line, part`);
  return z.array(toldRow).parse(rows);
}

const voidedRow = z.object({
  upload_id: z.number(),
  line: z.number(),
  part: z.number(),
  file_name: z.string(),
  area_name: z.string(),
  arrived: date,
  started: date,
  finished: date,
  voided_by: z.number(),
});
export type VoidedRow = z.infer<typeof voidedRow>;

/** The rows of a job that a later upload voids, being the whole truth for their area over their time. */
export async function readVoidedRows(
  { tx, organisationId, siteId }: SiteReader,
  jobKey: string,
): Promise<VoidedRow[]> {
  const moves = await readAreaMoves({ tx, organisationId, siteId });
  const { rows } = await tx.execute(sql`/* voided rows of a job */
    select
      told.upload_id, told.line, told.part, told.arrived, told.started, told.finished,
      upload.file_name, zone.name as area_name, truth.upload_id as voided_by
    from upload_row as told
    join upload on upload.organisation_id = told.organisation_id
      and upload.site_id = told.site_id and upload.id = told.upload_id
    join zone on zone.organisation_id = told.organisation_id
      and zone.site_id = told.site_id and zone.id = told.area_id
    cross join lateral (
      select min(truth.upload_id) as upload_id from upload_area as truth
      where ${isTruthFor(organisationId, siteId, moves)}
    ) as truth
    where told.organisation_id = ${organisationId} and told.site_id = ${siteId}
      and told.job_key = ${jobKey} and truth.upload_id is not null
    order by told.upload_id, told.line, told.part`);
  return z.array(voidedRow).parse(rows);
}

const stayRow = z.object({
  zone_id: z.number(),
  zone_name: z.string(),
  kind: z.enum(['area', 'loop', 'site']),
  entered: z.coerce.date(),
  started: date,
  left_at: date,
  queue_seconds: seconds,
  process_seconds: seconds,
  flow_seconds: seconds,
});
export type StayRow = z.infer<typeof stayRow>;

/** The stays of a job in every zone, by time of entry. */
export async function readJobStays(
  { tx, organisationId, siteId }: SiteReader,
  jobKey: string,
): Promise<StayRow[]> {
  const { rows } = await tx.execute(sql`/* job stays */
    select
      zone_stay.*, zone.name as zone_name, zone.kind,
      queue_microseconds / 1000000.0 as queue_seconds,
      process_microseconds / 1000000.0 as process_seconds,
      extract(epoch from left_at - entered) as flow_seconds
    from zone_stay join zone
      on zone.organisation_id = zone_stay.organisation_id
      and zone.site_id = zone_stay.site_id
      and zone.id = zone_stay.zone_id
    where zone_stay.organisation_id = ${organisationId} and zone_stay.site_id = ${siteId}
      and job_key = ${jobKey}
    order by entered, kind, zone_id`);
  return z.array(stayRow).parse(rows);
}

/** Keys of jobs that begin with a text, a few. A range of the byte-ordered key uses the index. */
export async function readJobKeys(
  { tx, organisationId, siteId }: SiteReader,
  begins: string,
  limit: number,
): Promise<string[]> {
  const { rows } = await tx.execute(sql`/* job keys */
    select distinct job_key from record
    where organisation_id = ${organisationId} and site_id = ${siteId}
      and job_key >= ${begins} and job_key < ${begins}::text || chr(1114111) collate "C"
    order by job_key limit ${limit}`);
  return z
    .array(z.object({ job_key: z.string() }))
    .parse(rows)
    .map((row) => row.job_key);
}
