import { eq } from 'drizzle-orm';
import {
  createFirstAdmin,
  readSession,
  signIn,
  signOut,
  signOutEverywhere,
  type SessionAnswer,
} from '../../../shared/contracts/auth.ts';
import { organisationsOf } from '../../auth/memberships.ts';
import { makeFirstAdmin } from '../../auth/first-admin.ts';
import { passwordMatches } from '../../auth/passwords.ts';
import { openSession, revokeSession, revokeSessionsOf } from '../../auth/sessions.ts';
import { person } from '../../db/schema/people.ts';
import { demoAccounts, demoPassword } from '../../demo/accounts.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ApiError, notAllowed } from '../../errors.ts';
import type { Api, Call } from '../api.ts';
import { clearSessionCookie, setSessionCookie } from '../session-answer.ts';

type Answering = Pick<Call<unknown, unknown, unknown>, 'res'>;

export function registerAuth({ route, deps }: Api): void {
  route(signIn, async ({ body, req, res }) => {
    const origin = req.ip ?? 'unknown';
    await deps.throttle.check(body.email, origin);
    const [found] = await deps.db.select().from(person).where(eq(person.email, body.email));
    if (!(await passwordMatches(found?.passwordHash ?? null, body.password)) || !found) {
      await deps.throttle.noteFailure(body.email, origin);
      throw new ApiError('wrong-credentials', 'The e-mail address or the password is wrong.');
    }
    await deps.throttle.noteSuccess(body.email);
    return startSession(deps, { res }, found);
  });

  route(signOut, async ({ actor, res }) => {
    if (actor.kind === 'person') await revokeSession(deps.db, actor.sessionId, deps.clock.now());
    clearSessionCookie(res);
    return undefined;
  });

  route(signOutEverywhere, async ({ actor, res }) => {
    if (actor.kind !== 'person') throw notAllowed();
    await revokeSessionsOf(deps.db, actor.personId, deps.clock.now());
    clearSessionCookie(res);
    return undefined;
  });

  route(readSession, async ({ actor }) => ({
    session:
      actor.kind === 'person'
        ? {
            user: { id: actor.personId, email: actor.email, name: actor.name },
            organisations: await organisationsOf(deps.db, actor.personId, deps.clock.now()),
          }
        : null,
    demoAccounts: deps.env.WEIRMARK_DEMO ? await demoAccounts(deps.db) : [],
    demoPassword: deps.env.WEIRMARK_DEMO ? demoPassword : null,
    awaitsFirstAdmin: await deps.firstAdmin.isOpen(),
  }));

  route(createFirstAdmin, async ({ body, req, res, requestId }) => {
    const origin = req.ip ?? 'unknown';
    await deps.throttle.check('first admin', origin);
    if (!(await deps.firstAdmin.matches(body.token))) {
      await deps.throttle.noteFailure('first admin', origin);
      throw new ApiError(
        'wrong-credentials',
        'The token is wrong or was used already. The log of the server shows the one that holds.',
      );
    }
    const made = await makeFirstAdmin(deps, body, requestId);
    return startSession(deps, { res }, made);
  });
}

async function startSession(
  deps: Dependencies,
  { res }: Answering,
  who: { id: number; email: string; name: string },
): Promise<SessionAnswer> {
  const now = deps.clock.now();
  const opened = await openSession(deps.db, who.id, now);
  await setSessionCookie(deps, res, opened, opened.expiresAt);
  return {
    user: { id: who.id, email: who.email, name: who.name },
    organisations: await organisationsOf(deps.db, who.id, now),
  };
}
