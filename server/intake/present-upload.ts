import { z } from 'zod';
import { columnPlanSchema, fileKinds } from '../../shared/contracts/plan.ts';
import { rowAccountSchema, type RowAccount, type Upload } from '../../shared/contracts/uploads.ts';
import type { upload } from '../db/schema/uploads.ts';

/** An upload as the database holds it, with the name of who handed it over. */
export type UploadRow = Omit<typeof upload.$inferSelect, 'receivedBy' | 'receivedKey'> & {
  receivedBy: string | null;
};

const fileKindSchema = z.enum(fileKinds);
const failureSchema = z.object({ code: z.string(), detail: z.string() }).nullable();

const emptyAccount: RowAccount = {
  rowsRead: 0,
  skipped: 0,
  new: 0,
  same: 0,
  completing: 0,
  correcting: 0,
  refused: 0,
  skippedBy: {},
  refusedBy: {},
  warnings: {},
  voided: 0,
};

/** An upload as it is answered. One that is still arriving is not answered at all. */
export function presentUpload(row: UploadRow): Upload {
  const failure = failureSchema.parse(row.error);
  const status = row.status === 'receiving' ? 'waiting' : row.status;
  return {
    id: row.id,
    status,
    fileName: row.fileName,
    fileKind: row.fileKind === null ? null : fileKindSchema.parse(row.fileKind),
    receivedAt: row.receivedAt.toISOString(),
    receivedBy: row.receivedBy,
    withdrawing: row.withdrawRequestedAt !== null && status !== 'withdrawn',
    progress: {
      rows: row.progressRows,
      bytes: row.progressBytes,
      bytesTotal: row.byteSize,
    },
    plan: columnPlanSchema.nullable().parse(row.plan ?? row.planGiven),
    account: row.account === null ? emptyAccount : rowAccountSchema.parse(row.account),
    dataUntil: row.latestAt?.toISOString() ?? null,
    error: failure?.code ?? null,
    errorDetail: failure?.detail ?? null,
  };
}
