import type { Request } from 'express';
import type { Env } from '../../env.ts';
import { ApiError } from '../../errors.ts';

/**
 * Refuses a write that a page of another origin had a browser send: its Origin (else Referer) must name the
 * host that was asked, or the origin under which people reach the server. A browser always sends one of
 * them with a write; where neither is there, no browser sent it, and whoever did holds the cookie.
 *
 * @throws ApiError foreign-origin
 */
export function refuseForeignOrigin(env: Env, req: Request): void {
  const claimed = req.headers.origin ?? req.headers.referer;
  if (claimed === undefined) return;
  const page = URL.canParse(claimed) ? new URL(claimed) : null;
  // The scheme may have been changed by a proxy; the host is what a foreign page cannot share.
  if (page && page.host !== '' && page.host === req.headers.host) return;
  if (page && env.WEIRMARK_ORIGIN && page.origin === new URL(env.WEIRMARK_ORIGIN).origin) return;
  throw new ApiError(
    'foreign-origin',
    'This request was sent from a page of another site, so nothing was done.',
  );
}
