import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import { recordAct } from '../audit/record-act.ts';
import type { Actor } from '../auth/actor.ts';
import type { Database } from '../db/client.ts';
import { withTenant } from '../db/tenant.ts';
import type { UploadKey } from './original.ts';
import {
  requestReading,
  requestStop,
  requestWithdrawal,
  type WishedUpload,
} from './site-uploads.ts';

/** Who wishes it, when, and in which request. */
export interface Wish {
  actor: Actor;
  at: Date;
  requestId?: string;
}

/** Asks that an upload be stopped, and notes who asked. @throws ApiError where it cannot be */
export function stopUpload(db: Database, key: UploadKey, wish: Wish): Promise<WishedUpload> {
  return withTenant(db, key.organisationId, async (tx) => {
    const wished = await requestStop(tx, key, wish.at);
    await recordAct(tx, { ...key, ...wish, ...subject(key), action: 'upload.stop' });
    return wished;
  });
}

/** Asks that an upload be read again, and notes who asked. @throws ApiError where it cannot be */
export function readUploadAgain(
  db: Database,
  key: UploadKey,
  plan: ColumnPlan | null,
  wish: Wish,
): Promise<WishedUpload> {
  return withTenant(db, key.organisationId, async (tx) => {
    const wished = await requestReading(tx, key, plan);
    await recordAct(tx, { ...key, ...wish, ...subject(key), action: 'upload.read-again' });
    return wished;
  });
}

/** Asks that an upload be withdrawn, and notes who asked. @throws ApiError where it cannot be */
export function withdrawUpload(db: Database, key: UploadKey, wish: Wish): Promise<WishedUpload> {
  return withTenant(db, key.organisationId, async (tx) => {
    const wished = await requestWithdrawal(tx, key, wish.at);
    await recordAct(tx, { ...key, ...wish, ...subject(key), action: 'upload.withdraw' });
    return wished;
  });
}

const subject = ({ uploadId }: UploadKey) => ({ subjectKind: 'upload', subjectId: uploadId });
