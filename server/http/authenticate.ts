import type { Request, Response } from 'express';
import { keyMay, policy, roleMay, type Action, type Rule } from '../../shared/permissions.ts';
import { findMachine, findPerson, type Actor, type SiteOfRequest } from '../auth/actor.ts';
import { cookieValue, readSessionToken, sessionCookieName } from '../auth/session-cookie.ts';
import { rotateAfterMs, rotateSession } from '../auth/sessions.ts';
import type { Dependencies } from '../dependencies.ts';
import { notAllowed, notFound, signedOut } from '../errors.ts';
import { setSessionCookie } from './session-answer.ts';

export interface Authenticated {
  actor: Actor;
  site: SiteOfRequest | null;
  /** Whether an access key was shown, which no browser sends along unasked. */
  byKey: boolean;
}

/** Who asks: the bearer of an access key, the holder of a session, or a stranger. Renews an old cookie. */
export async function authenticate(
  deps: Dependencies,
  req: Request,
  res: Response,
  siteId: number | null,
): Promise<Authenticated> {
  const stranger = { actor: { kind: 'stranger' }, site: null, byKey: false } as const;
  const bearer = /^Bearer (\S+)$/i.exec(req.headers.authorization ?? '')?.[1];
  if (bearer !== undefined) {
    const actor = await findMachine(deps.db, bearer, deps.clock.now());
    if (!actor) return stranger;
    const site = siteId === actor.siteId ? { siteId, organisationId: actor.organisationId } : null;
    return { actor, site, byKey: true };
  }
  const cookie = cookieValue(req.headers.cookie, sessionCookieName);
  const now = deps.clock.now();
  const token = cookie === null ? null : await readSessionToken(deps.sessionKey, cookie, now);
  if (!token) return stranger;
  const found = await findPerson(deps.db, token, siteId, now);
  if (!found) return stranger;
  await renewCookie(deps, res, found.actor, now);
  return { ...found, byKey: false };
}

async function renewCookie(
  deps: Dependencies,
  res: Response,
  actor: Actor & { kind: 'person' },
  now: Date,
): Promise<void> {
  if (now.getTime() - actor.rotatedAt.getTime() < rotateAfterMs) return;
  const rotation = await rotateSession(deps.db, actor.sessionId, actor.rotation, now);
  if (rotation === null) return;
  await setSessionCookie(deps, res, { sessionId: actor.sessionId, rotation }, actor.expiresAt);
}

/**
 * The one place where the policy is enforced on a request.
 *
 * @param siteId the site named in the path, or null
 * @throws ApiError signed-out for strangers, not-found for a site that is not theirs, not-allowed for a
 *   role that may not. Actions open to area owners pass for supervisors: the handler asks for the area.
 */
export function authorise(
  action: Action,
  { actor, site }: Pick<Authenticated, 'actor' | 'site'>,
  siteId: number | null,
): void {
  const rule: Rule = policy[action];
  if (rule.open === 'anyone') return;
  if (actor.kind === 'stranger') throw signedOut();
  if (actor.kind === 'machine') {
    if (!keyMay(action)) throw notAllowed();
    if (!site) throw notFound('The site');
    return;
  }
  if (rule.open === 'person' || siteId === null) return;
  if (!site || !actor.role) throw notFound('The site');
  if (!roleMay(actor.role, action, true)) throw notAllowed();
}
