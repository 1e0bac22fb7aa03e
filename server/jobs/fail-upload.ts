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
  const failure =
    error instanceof IntakeFailure
      ? error
      : new IntakeFailure(
          'internal-error',
          'Something went wrong while this file was read.',
          'Upload it again, or tell your administrator: the log names this upload.',
        );
  if (failure.code === 'internal-error') task.log.error({ err: error, uploadId }, 'upload failed');
  const { organisationId, siteId } = task;
  await withTenant(task.db, organisationId, (tx) =>
    endUpload(tx, { organisationId, siteId, uploadId }, failure, task.clock.now()),
  );
}

/** SQLSTATE classes 08 (connection) and 57P (shut down), and sockets that broke. */
function isLostConnection(error: unknown): boolean {
  for (let each: unknown = error; each instanceof Error; each = each.cause) {
    const code = 'code' in each && typeof each.code === 'string' ? each.code : '';
    if (/^(08|57P|ECONN|EPIPE)/.test(code)) return true;
    if (/Connection terminated|Client has encountered a connection error/.test(each.message))
      return true;
  }
  return false;
}
