import type { Act } from '../audit/record-act.ts';
import type { Clock } from '../clock.ts';
import type { Call } from './api.ts';

/** What the audit trail says of any call: who made it, when, where, under which request id. */
export const actOf = (
  { organisationId, siteId, actor, requestId }: Call<unknown, unknown, unknown>,
  clock: Clock,
): Pick<Act, 'organisationId' | 'siteId' | 'actor' | 'requestId' | 'at'> => ({
  organisationId,
  siteId,
  actor,
  requestId,
  at: clock.now(),
});
