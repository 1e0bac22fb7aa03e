import type { Response } from 'express';
import { sessionCookieName, signSessionToken, type SessionToken } from '../auth/session-cookie.ts';
import type { Dependencies } from '../dependencies.ts';

/** Sets the session cookie on an answer. */
export async function setSessionCookie(
  deps: Dependencies,
  res: Response,
  token: SessionToken,
  expiresAt: Date,
): Promise<void> {
  res.cookie(sessionCookieName, await signSessionToken(deps.sessionKey, token, expiresAt), {
    httpOnly: true,
    sameSite: 'lax',
    secure: res.req.secure,
    path: '/',
    expires: expiresAt,
  });
}

export function clearSessionCookie(res: Response): void {
  res.clearCookie(sessionCookieName, {
    httpOnly: true,
    sameSite: 'lax',
    secure: res.req.secure,
    path: '/',
  });
}
