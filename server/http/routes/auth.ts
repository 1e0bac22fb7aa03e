import type { Request, Response } from 'express';
import {
  createFirstAdmin,
  readSession,
  signIn,
  signOut,
  signOutEverywhere,
  type SessionAnswer,
} from '../../../shared/contracts/auth.ts';
import { organisationsOf } from '../../auth/memberships.ts';
import { findByPassword, type KnownPerson } from '../../auth/find-by-password.ts';
import { makeFirstAdmin } from '../../auth/first-admin.ts';
import { openSession, revokeSession, revokeSessionsOf } from '../../auth/sessions.ts';
import { demoAccounts, demoPassword } from '../../demo/accounts.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ApiError, notAllowed } from '../../errors.ts';
import type { Api } from '../api.ts';
import { clearSessionCookie, setSessionCookie } from '../session-answer.ts';

export function registerAuth({ route, deps }: Api): void {
  route(signIn, async ({ body, req, res }) => {
    const found = await deps.throttle.attempt(body.email, originOf(req), () =>
      findByPassword(deps.db, body),
    );
    if (!found)
      throw new ApiError('wrong-credentials', 'The e-mail address or the password is wrong.');
    return startSession(deps, res, found);
  });

  route(signOut, async ({ actor, res }) => {
    if (actor.kind === 'person') await revokeSession(deps.db, actor.sessionId, deps.clock.now());
    clearSessionCookie(deps, res);
    return undefined;
  });

  route(signOutEverywhere, async ({ actor, res }) => {
    if (actor.kind !== 'person') throw notAllowed();
    await revokeSessionsOf(deps.db, actor.personId, deps.clock.now());
    clearSessionCookie(deps, res);
    return undefined;
  });

  route(readSession, async ({ actor }) => {
    const accounts = deps.env.WEIRMARK_DEMO !== '0' ? await demoAccounts(deps.db) : [];
    return {
      session:
        actor.kind === 'person'
          ? {
              user: { id: actor.personId, email: actor.email, name: actor.name },
              organisations: await organisationsOf(deps.db, actor.personId, deps.clock.now()),
            }
          : null,
      demoAccounts: accounts,
      demoPassword: accounts.length > 0 ? demoPassword : null,
      awaitsFirstAdmin: await deps.firstAdmin.isOpen(),
    };
  });

  route(createFirstAdmin, async ({ body, req, res, requestId }) => {
    const matches = await deps.throttle.attempt('first admin', originOf(req), async () =>
      (await deps.firstAdmin.matches(body.token)) ? true : null,
    );
    if (!matches)
      throw new ApiError(
        'wrong-credentials',
        'The token is wrong or was used already. The log of the server shows the one that holds.',
      );
    return startSession(deps, res, await makeFirstAdmin(deps, body, requestId));
  });
}

const originOf = (req: Request): string => req.ip ?? 'unknown';

async function startSession(
  deps: Dependencies,
  res: Response,
  who: KnownPerson,
): Promise<SessionAnswer> {
  const now = deps.clock.now();
  const opened = await openSession(deps.db, who.id, now);
  await setSessionCookie(deps, res, opened, opened.expiresAt);
  return {
    user: { id: who.id, email: who.email, name: who.name },
    organisations: await organisationsOf(deps.db, who.id, now),
  };
}
