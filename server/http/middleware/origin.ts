import type { Request } from 'express';
import type { Env } from '../../env.ts';
import { ApiError } from '../../errors.ts';

/**
 * Refuses a write that a page of another origin had a browser send: its Origin (else Referer) must be
 * ours. A browser always sends one of them with a write; where neither is there, no browser sent it, and
 * the cookie was put there by whoever holds it.
 *
 * @throws ApiError foreign-origin
 */
export function refuseForeignOrigin(env: Env, req: Request): void {
  const claimed = req.headers.origin ?? originOf(req.headers.referer);
  if (claimed === undefined) return;
  const own = env.WEIRMARK_ORIGIN ?? `${req.protocol}://${req.headers.host ?? ''}`;
  if (claimed === new URL(own).origin) return;
  throw new ApiError(
    'foreign-origin',
    'This request was sent from a page of another site, so nothing was done.',
  );
}

function originOf(referer: string | undefined): string | undefined {
  if (referer === undefined) return undefined;
  return URL.canParse(referer) ? new URL(referer).origin : 'unreadable';
}
