import { isLostConnection, isStorageFull } from '../db/faults.ts';
import { withTenant } from '../db/tenant.ts';
import { IntakeFailure } from '../intake/failure.ts';
import { endUpload } from '../intake/site-uploads.ts';
import type { SiteTask } from './site-work.ts';

/** After so many broken-off attempts an upload is given up. */
export const attemptLimit = 5;

/**
 * Ends an upload that could not be taken in, with a code and a sentence. A fault of our own is logged
 * and told as such; a lost database is thrown on, so that the work is done again.
 */
export async function failUpload(task: SiteTask, uploadId: number, error: unknown): Promise<void> {
  if (isLostConnection(error)) throw error;
  const failure = error instanceof IntakeFailure ? error : failureOf(error);
  if (failure !== error) task.log.error({ err: error, uploadId }, 'upload failed');
  const { organisationId, siteId } = task;
  await withTenant(task.db, organisationId, (tx) =>
    endUpload(tx, { organisationId, siteId, uploadId }, failure, task.clock.now()),
  );
}

function failureOf(error: unknown): IntakeFailure {
  if (isStorageFull(error))
    return new IntakeFailure(
      'storage-full',
      'The disk of the database is full.',
      'Tell your administrator; once there is room, read the file again: it need not be sent again.',
    );
  return new IntakeFailure(
    'internal-error',
    'Something went wrong while this file was read.',
    'Upload it again, or tell your administrator: the log names this upload.',
  );
}
