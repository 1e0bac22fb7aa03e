import type { CookieOptions, Response } from 'express';
import { sessionCookieName, signSessionToken, type SessionToken } from '../auth/session-cookie.ts';
import type { Dependencies } from '../dependencies.ts';

/** Out of reach of scripts, not sent along by other sites' forms, and over https only where people use it. */
const cookieOptions = ({ env }: Dependencies, res: Response): CookieOptions => ({
  httpOnly: true,
  sameSite: 'lax',
  secure: res.req.secure || env.WEIRMARK_ORIGIN?.startsWith('https:') === true,
  path: '/',
});

/** Sets the session cookie on an answer. */
export async function setSessionCookie(
  deps: Dependencies,
  res: Response,
  token: SessionToken,
  expiresAt: Date,
): Promise<void> {
  const signed = await signSessionToken(deps.sessionKey, token, expiresAt);
  res.cookie(sessionCookieName, signed, { ...cookieOptions(deps, res), expires: expiresAt });
}

export function clearSessionCookie(deps: Dependencies, res: Response): void {
  res.clearCookie(sessionCookieName, cookieOptions(deps, res));
}
