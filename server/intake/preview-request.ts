import { Readable } from 'node:stream';
import type { Request } from 'express';
import type { StorageEngine } from 'multer';
import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import type { UploadPreview } from '../../shared/contracts/uploads.ts';
import type { Database } from '../db/client.ts';
import { withTenant } from '../db/tenant.ts';
import { ApiError, invalidInput } from '../errors.ts';
import { listSavedPlans } from './column-plans.ts';
import { IntakeFailure } from './failure.ts';
import { isZip } from './file-kind.ts';
import { sampleBytes } from './limits.ts';
import { readPlanPart } from './plan-part.ts';
import { readOriginal, type UploadKey } from './original.ts';
import { previewOf, type PreviewInput } from './preview.ts';
import { readReadingSite } from './reading-site.ts';
import { readForm } from './receive.ts';
import type { SiteKey } from './site-uploads.ts';

const isWorkbook = (head: Buffer | undefined): boolean => head !== undefined && isZip(head);

/** Of a whole file that is sent for a preview no more than this is taken. */
const previewMb = 64;

/**
 * Shows what would be read of the file in a request, without keeping anything.
 *
 * @throws ApiError where the request, the plan or the file cannot be read
 */
export async function previewRequest(
  request: Request,
  db: Database,
  siteKey: SiteKey,
  receivedAt: Date,
): Promise<UploadPreview> {
  const head = new HeadStorage();
  await readForm(request, head, previewMb * 1_048_576, previewMb);
  if (!head.isFilled) {
    throw invalidInput('The request holds no file.', [
      { field: 'file', message: 'Send the beginning of the export as a part named file.' },
    ]);
  }
  const { plan: part } = request.body as { plan?: string };
  const plan = await readPlanPart(db, siteKey, part);
  return preview(db, siteKey, {
    open: () => copyOf(head.bytes),
    isCut: head.isCut,
    plan,
    receivedAt,
  });
}

/**
 * Shows what would be read of a file that was uploaded, by another plan or by the one that is detected.
 *
 * @throws ApiError where the file cannot be read
 */
export const previewStored = (
  db: Database,
  key: UploadKey,
  plan: ColumnPlan | null,
  receivedAt: Date,
): Promise<UploadPreview> =>
  preview(db, key, { open: () => readOriginal(db, key), isCut: false, plan, receivedAt });

async function preview(
  db: Database,
  siteKey: SiteKey,
  asked: Pick<PreviewInput, 'open' | 'isCut' | 'plan' | 'receivedAt'>,
): Promise<UploadPreview> {
  const context = await withTenant(db, siteKey.organisationId, (tx) =>
    readReadingSite(tx, siteKey),
  );
  const savedPlans = await listSavedPlans(db, siteKey);
  try {
    return await previewOf({ ...asked, savedPlans, ...context });
  } catch (error) {
    if (!(error instanceof IntakeFailure)) throw error;
    throw new ApiError('invalid-input', error.advice, {
      errors: [{ field: 'file', message: error.advice }],
    });
  }
}

/** The bytes as a stream; a copy, since a reading may change them in place. */
const copyOf = (bytes: Buffer): AsyncIterable<Buffer> => Readable.from([Buffer.from(bytes)]);

/**
 * Keeps the beginning of a file in memory and drops the rest; of a workbook, whose sheets may stand anywhere
 * in it, as much as is taken.
 */
class HeadStorage implements StorageEngine {
  bytes: Buffer = Buffer.alloc(0);
  isFilled = false;
  /** Whether there is more of the file than was kept. */
  isCut = false;

  _handleFile(
    _request: Request,
    file: Express.Multer.File,
    done: (error?: unknown, info?: Partial<Express.Multer.File>) => void,
  ): void {
    const kept: Buffer[] = [];
    let length = 0;
    file.stream.on('data', (block: Buffer) => {
      if (length < sampleBytes || isWorkbook(kept[0])) kept.push(block);
      length += block.length;
    });
    file.stream.on('error', done);
    file.stream.on('end', () => {
      const bytes = Buffer.concat(kept);
      this.bytes = isWorkbook(bytes) ? bytes : bytes.subarray(0, sampleBytes);
      // A client that sends no more than a sample does not say whether there is more.
      this.isCut = !isWorkbook(bytes) && length >= sampleBytes;
      this.isFilled = true;
      done(null, { size: length });
    });
  }

  _removeFile(_request: Request, _file: unknown, done: (error: Error | null) => void): void {
    done(null);
  }
}
