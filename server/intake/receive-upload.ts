import type { Readable } from 'node:stream';
import type { Request } from 'express';
import { and, eq } from 'drizzle-orm';
import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import { recordAct } from '../audit/record-act.ts';
import type { Doer } from '../auth/actor.ts';
import type { Clock } from '../clock.ts';
import type { Database } from '../db/client.ts';
import { upload } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';
import { hasCode } from '../db/faults.ts';
import { ApiError } from '../errors.ts';
import { discardReceipt } from './discard-receipts.ts';
import { holdReceipt, type HeldReceipt } from './hold-receipt.ts';
import type { UploadKey } from './original.ts';
import { readPlanPart } from './plan-part.ts';
import { receiveParts, type ReceiptLimits, type ReceivedParts } from './receive.ts';
import type { SiteKey } from './site-uploads.ts';
import { storeOriginal, type Receipt } from './store-original.ts';

export interface ReceiptContext {
  db: Database;
  clock: Clock;
  actor: Doer;
  requestId?: string;
}

/** Of a request, also how large a file may be, and how long nothing may come. */
export interface RequestContext extends ReceiptContext, ReceiptLimits {}

/**
 * Receives a file with its column plan, whole or not at all, and makes it an upload that waits to be read.
 *
 * @returns the upload's id
 * @throws ApiError where the request or the plan is not in order; nothing of the file is left then
 */
export async function receiveUpload(
  request: Request,
  site: SiteKey,
  context: RequestContext,
): Promise<number> {
  const { db } = context;
  return wholeOrNothing(site, context, async (key, receipt) => {
    const received = await receiveParts(request, db, receipt, context);
    const plan = await readPlanPart(db, site, received.planPart);
    await accept(key, received, plan, context);
  });
}

/**
 * Receives a file that lies on the server's own disk, to be read by the plan that is detected.
 *
 * @returns the upload's id
 */
export async function receiveFile(
  file: Readable,
  fileName: string,
  site: SiteKey,
  context: ReceiptContext,
): Promise<number> {
  return wholeOrNothing(site, context, async (key, receipt) => {
    const stored = await storeOriginal(context.db, { ...receipt, fileName }, file);
    await accept(key, { stored, fileName }, null, context);
  });
}

/** Receives under the lock of a new upload; where that fails, what has arrived is discarded. */
function wholeOrNothing(
  site: SiteKey,
  context: ReceiptContext,
  receive: (key: UploadKey, receipt: Omit<Receipt, 'fileName'>) => Promise<void>,
): Promise<number> {
  return holdReceipt(context.db, async (held) => {
    const key = { ...site, uploadId: held.uploadId };
    try {
      await receive(key, receiptOf(site, context, held));
      return held.uploadId;
    } catch (error) {
      // Where the database is away, the sweep for what nobody receives any more does it later.
      await discardReceipt(context.db, key).catch(() => undefined);
      // A chunk has nothing to belong to where another server took this one for dead.
      throw hasCode(error, [foreignKeyViolation]) ? lostOnTheWay() : error;
    }
  });
}

const foreignKeyViolation = '23503';
const lostOnTheWay = () =>
  new ApiError(
    'unavailable',
    'The file was lost while it arrived. Nothing of it was kept. Send it again.',
  );

const receiptOf = (
  site: SiteKey,
  { clock, actor }: ReceiptContext,
  held: HeldReceipt,
): Omit<Receipt, 'fileName'> => ({
  ...site,
  ...held,
  receivedAt: clock.now(),
  receivedBy: actor.kind === 'person' ? actor.personId : null,
  receivedKey: actor.kind === 'machine' ? actor.accessKeyId : null,
});

async function accept(
  key: UploadKey,
  { stored, fileName }: Pick<ReceivedParts, 'stored' | 'fileName'>,
  planGiven: ColumnPlan | null,
  { db, clock, actor, requestId }: ReceiptContext,
): Promise<void> {
  const { organisationId, siteId, uploadId } = key;
  const { byteSize, sha256 } = stored;
  const at = clock.now();
  await withTenant(db, organisationId, async (tx) => {
    const accepted = await tx
      .update(upload)
      .set({ status: 'waiting', byteSize, sha256, planGiven, receivedAt: at })
      .where(
        and(
          eq(upload.organisationId, organisationId),
          eq(upload.siteId, siteId),
          eq(upload.id, uploadId),
          eq(upload.status, 'receiving'),
        ),
      )
      .returning({ id: upload.id });
    if (accepted.length === 0) throw lostOnTheWay();
    await recordAct(tx, {
      organisationId,
      siteId,
      at,
      actor,
      action: 'upload.create',
      subjectKind: 'upload',
      subjectId: uploadId,
      after: { fileName, byteSize, sha256 },
      ...(requestId === undefined ? {} : { requestId }),
    });
  });
}
