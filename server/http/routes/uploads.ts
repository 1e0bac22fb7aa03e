import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import {
  createUpload,
  listUploads,
  previewStoredUpload,
  previewUpload,
  readOriginal as readOriginalCall,
  readRefusedRows,
  readUpload,
  readUploadAgain,
  readUploadRow,
  stopUpload,
  withdrawUpload,
} from '../../../shared/contracts/uploads.ts';
import { columnPlanSchema } from '../../../shared/contracts/plan.ts';
import { notFound } from '../../errors.ts';
import { readOriginal } from '../../intake/original.ts';
import { planAskedFor } from '../../intake/plan-part.ts';
import { presentUpload } from '../../intake/present-upload.ts';
import { previewRequest, previewStored } from '../../intake/preview-request.ts';
import { receiveUpload } from '../../intake/receive-upload.ts';
import { refusedCsv } from '../../intake/refused-csv.ts';
import { findRowOfFile } from '../../intake/row-of-file.ts';
import { findUpload, listUploadsOf } from '../../intake/site-uploads.ts';
import * as wishes from '../../intake/wishes.ts';
import type { Api, Call } from '../api.ts';

export function registerUploads({ route, deps }: Api): void {
  const { db, clock, env, queue } = deps;
  const keyOf = ({ organisationId, params }: UploadCall) => ({ organisationId, ...params });

  route(createUpload, async ({ organisationId, siteId, actor, requestId, req }) => {
    const context = { db, clock, actor, requestId, limitMb: env.WEIRMARK_UPLOAD_LIMIT_MB };
    const id = await receiveUpload(req, { organisationId, siteId }, context);
    await queue.wake(organisationId, siteId);
    return { id, status: 'waiting' as const };
  });

  route(listUploads, async (call) => {
    const rows = await listUploadsOf(db, call);
    return rows.map(presentUpload);
  });

  route(readUpload, async (call) => presentUpload(await findUpload(db, keyOf(call))));

  route(readRefusedRows, async (call) => {
    const key = keyOf(call);
    await findUpload(db, key);
    call.res.status(200).type('text/csv').attachment(`refused-rows-${key.uploadId}.csv`);
    await pipeline(Readable.from(refusedCsv(db, key)), call.res);
    return '';
  });

  route(readUploadRow, async (call) => {
    const { uploadId, line } = call.params;
    const found = await findUpload(db, keyOf(call));
    const plan = columnPlanSchema.nullable().parse(found.plan);
    const row = await findRowOfFile(() => readOriginal(db, keyOf(call)), plan, line);
    if (!row) throw notFound(`A row that begins on line ${line}`);
    return { uploadId, fileName: found.fileName, line, ...row };
  });

  route(stopUpload, (call) => wishes.stopUpload(db, keyOf(call), wishOf(call)));

  route(readUploadAgain, async (call) => {
    const key = keyOf(call);
    const plan = await planAskedFor(db, key, call.body.plan);
    const wished = await wishes.readUploadAgain(db, key, plan, wishOf(call));
    await queue.wake(call.organisationId, call.siteId);
    return wished;
  });

  route(readOriginalCall, async (call) => {
    const key = keyOf(call);
    const { fileName } = await findUpload(db, key);
    call.res.status(200).attachment(fileName).type('application/octet-stream');
    await pipeline(Readable.from(readOriginal(db, key)), call.res);
    return '';
  });

  route(withdrawUpload, async (call) => {
    const wished = await wishes.withdrawUpload(db, keyOf(call), wishOf(call));
    await queue.wake(call.organisationId, call.siteId);
    return wished;
  });

  route(previewStoredUpload, async (call) => {
    const key = keyOf(call);
    const { receivedAt } = await findUpload(db, key);
    const plan = await planAskedFor(db, key, call.body.plan);
    return previewStored(db, key, plan, receivedAt);
  });

  route(previewUpload, ({ organisationId, siteId, req }) =>
    previewRequest(req, db, { organisationId, siteId }, clock.now()),
  );

  const wishOf = ({ actor, requestId }: Pick<UploadCall, 'actor' | 'requestId'>) => ({
    actor,
    requestId,
    at: clock.now(),
  });
}

type UploadCall = Call<{ siteId: number; uploadId: number }, unknown, unknown>;
