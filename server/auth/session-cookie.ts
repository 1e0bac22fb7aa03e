import { jwtVerify, SignJWT } from 'jose';
import { z } from 'zod';

export const sessionCookieName = 'weirmark_session';

const claims = z.object({ sid: z.uuid(), rot: z.int() });

/** What the cookie carries: which session, and how often it was renewed. */
export interface SessionToken {
  sessionId: string;
  rotation: number;
}

/** Signs a session token (HS256); it is good until `expiresAt`. */
export function signSessionToken(
  key: Uint8Array,
  token: SessionToken,
  expiresAt: Date,
): Promise<string> {
  return new SignJWT({ sid: token.sessionId, rot: token.rotation })
    .setProtectedHeader({ alg: 'HS256' })
    .setExpirationTime(Math.floor(expiresAt.getTime() / 1000))
    .sign(key);
}

/** The token of a cookie, or null where it is forged, torn or too old. */
export async function readSessionToken(
  key: Uint8Array,
  cookie: string,
  now: Date,
): Promise<SessionToken | null> {
  try {
    const { payload } = await jwtVerify(cookie, key, { algorithms: ['HS256'], currentDate: now });
    const { sid, rot } = claims.parse(payload);
    return { sessionId: sid, rotation: rot };
  } catch {
    return null;
  }
}

/** The value of one cookie in a Cookie header, or null. */
export function cookieValue(header: string | undefined, name: string): string | null {
  for (const part of header?.split(';') ?? []) {
    const [key, ...value] = part.trim().split('=');
    if (key === name) return value.join('=');
  }
  return null;
}
