import type { Doer } from '../auth/actor.ts';
import type { Transaction } from '../db/client.ts';
import { auditEntry } from '../db/schema/audit.ts';

/** One act for the audit trail. */
export interface Act {
  organisationId: number;
  /** Left out where the act concerns the organisation as a whole. */
  siteId?: number;
  at: Date;
  actor: Doer;
  /** What was done, in the words of shared/permissions. */
  action: string;
  subjectKind: string;
  subjectId: string | number;
  before?: unknown;
  after?: unknown;
  requestId?: string;
}

/** Adds to the audit trail, in the transaction of the write itself: both happen, or neither. */
export async function recordAct(tx: Transaction, act: Act): Promise<void> {
  const { actor } = act;
  await tx.insert(auditEntry).values({
    organisationId: act.organisationId,
    siteId: act.siteId ?? 0,
    at: act.at,
    personId: actor.kind === 'person' ? actor.personId : null,
    accessKeyId: actor.kind === 'machine' ? actor.accessKeyId : null,
    action: act.action,
    subjectKind: act.subjectKind,
    subjectId: String(act.subjectId),
    before: act.before ?? null,
    after: act.after ?? null,
    requestId: act.requestId ?? null,
  });
}
