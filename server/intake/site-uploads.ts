import { and, desc, eq, getTableColumns, ne, sql } from 'drizzle-orm';
import type { Database, Transaction } from '../db/client.ts';
import { accessKey, person } from '../db/schema/people.ts';
import { upload } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';
import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import { conflict, notFound } from '../errors.ts';
import { stopped, type IntakeFailure } from './failure.ts';
import type { UploadKey } from './original.ts';
import type { UploadRow } from './present-upload.ts';

export interface SiteKey {
  organisationId: number;
  siteId: number;
}

/** The uploads of a site that were received whole, newest first. */
export function listUploadsOf(db: Database, site: SiteKey): Promise<UploadRow[]> {
  return withTenant(db, site.organisationId, (tx) => selectUploads(tx, site));
}

/** @throws ApiError where the site has no such upload */
export async function findUpload(db: Database, key: UploadKey): Promise<UploadRow> {
  const rows = await withTenant(db, key.organisationId, (tx) =>
    selectUploads(tx, key, key.uploadId),
  );
  return rows[0] ?? refuseUnknown();
}

function selectUploads(tx: Transaction, site: SiteKey, uploadId?: number): Promise<UploadRow[]> {
  return tx
    .select({
      ...columnsOf(),
      receivedBy: sql<string | null>`coalesce(${person.name}, ${accessKey.name})`,
    })
    .from(upload)
    .leftJoin(person, eq(person.id, upload.receivedBy))
    .leftJoin(accessKey, eq(accessKey.id, upload.receivedKey))
    .where(
      and(
        eq(upload.organisationId, site.organisationId),
        eq(upload.siteId, site.siteId),
        ne(upload.status, 'receiving'),
        uploadId === undefined ? undefined : eq(upload.id, uploadId),
      ),
    )
    .orderBy(desc(upload.id));
}

const isUpload = ({ organisationId, siteId, uploadId }: UploadKey) =>
  and(
    eq(upload.organisationId, organisationId),
    eq(upload.siteId, siteId),
    eq(upload.id, uploadId),
    ne(upload.status, 'receiving'),
  );

/** What a wish about an upload made of it. */
export interface WishedUpload {
  id: number;
  status: 'waiting' | 'reading' | 'loading' | 'loaded' | 'failed' | 'withdrawn';
}

/**
 * Asks that an upload be stopped: one that waits fails at once, one that is read or loaded when the work
 * on it next looks.
 *
 * @throws ApiError where there is no such upload, or it is over with already
 */
export async function requestStop(
  tx: Transaction,
  key: UploadKey,
  now: Date,
): Promise<WishedUpload> {
  const status = await lockStatus(tx, key);
  if (status === 'waiting') {
    const ended = await endUpload(tx, key, stopped(), now);
    return { id: key.uploadId, status: ended };
  }
  if (status !== 'reading' && status !== 'loading') {
    throw conflict(`The upload is ${status}; there is nothing to stop.`);
  }
  await tx.update(upload).set({ stopRequestedAt: now }).where(isUpload(key));
  return { id: key.uploadId, status };
}

/**
 * Ends an upload that was not taken in: it failed, or, where an earlier reading of it stands, that goes on
 * standing. The plan is then again the one by which it was read.
 *
 * @returns the status it has now
 */
export async function endUpload(
  tx: Transaction,
  key: UploadKey,
  failure: IntakeFailure,
  now: Date,
): Promise<'failed' | 'loaded'> {
  const [row] = await tx
    .update(upload)
    .set({
      status: sql`(case when ${upload.account} is null then 'failed' else 'loaded' end)::upload_status`,
      error: sql`jsonb_build_object(
        'code', ${failure.code}::text,
        'detail', case when ${upload.account} is null then ${failure.message}::text
          else ${`${failure.advice} What was loaded of it before stands.`}::text end
      )`,
      stopRequestedAt: null,
      finishedAt: now,
    })
    .where(isUpload(key))
    .returning({ status: upload.status });
  return row?.status === 'loaded' ? 'loaded' : 'failed';
}

/**
 * Asks that the original of an upload be read again; until that is done what stands goes on standing.
 *
 * @param plan by which to read it, or null for the plan of before
 * @throws ApiError where there is no such upload, or it is still under way or withdrawn
 */
export async function requestReading(
  tx: Transaction,
  key: UploadKey,
  plan: ColumnPlan | null,
): Promise<WishedUpload> {
  const status = await lockStatus(tx, key);
  if (status !== 'loaded' && status !== 'failed') {
    throw conflict(
      `The upload is ${status}; only one that is loaded or has failed can be read again.`,
    );
  }
  await tx
    .update(upload)
    .set({
      status: 'waiting',
      attempts: 0,
      error: null,
      stopRequestedAt: null,
      ...(plan
        ? { planGiven: plan }
        : { planGiven: sql`coalesce(${upload.plan}, ${upload.planGiven})` }),
    })
    .where(isUpload(key));
  return { id: key.uploadId, status: 'waiting' };
}

/**
 * Asks that an upload be withdrawn once it is loaded.
 *
 * @throws ApiError where there is no such upload, or nothing of it is in the site
 */
export async function requestWithdrawal(
  tx: Transaction,
  key: UploadKey,
  now: Date,
): Promise<WishedUpload> {
  const status = await lockStatus(tx, key);
  if (status === 'failed' || status === 'withdrawn') {
    throw conflict(
      status === 'failed'
        ? 'The upload failed; nothing of it is in the site.'
        : 'The upload was withdrawn already.',
    );
  }
  await tx
    .update(upload)
    .set({
      withdrawRequestedAt: sql`coalesce(${upload.withdrawRequestedAt}, ${now.toISOString()})`,
    })
    .where(isUpload(key));
  return { id: key.uploadId, status };
}

/** Reads the status and holds the upload until the transaction ends. */
async function lockStatus(tx: Transaction, key: UploadKey): Promise<WishedUpload['status']> {
  const [row] = await tx
    .select({ status: upload.status })
    .from(upload)
    .where(isUpload(key))
    .for('no key update');
  if (!row || row.status === 'receiving') return refuseUnknown();
  return row.status;
}

function refuseUnknown(): never {
  throw notFound('The upload');
}

function columnsOf() {
  const { receivedBy, receivedKey, ...columns } = getTableColumns(upload);
  void receivedBy;
  void receivedKey;
  return columns;
}
