import { and, eq, isNull, lt, sql } from 'drizzle-orm';
import type { Database } from '../db/client.ts';
import { session } from '../db/schema/people.ts';

const minute = 60_000;
/** A session ends so long after signing in, whatever happens. */
export const sessionLengthMs = 14 * 24 * 60 * minute;
/** So old a cookie is renewed, and the one before it holds for a short grace: requests cross. */
export const rotateAfterMs = 15 * minute;
export const rotationGraceMs = minute;

/** Opens a session for a person who proved to be one; sessions of theirs that ran out are forgotten. */
export async function openSession(
  db: Database,
  personId: number,
  now: Date,
): Promise<{ sessionId: string; rotation: number; expiresAt: Date }> {
  const expiresAt = new Date(now.getTime() + sessionLengthMs);
  await db.delete(session).where(and(eq(session.personId, personId), lt(session.expiresAt, now)));
  const [row] = await db
    .insert(session)
    .values({ personId, createdAt: now, rotatedAt: now, expiresAt })
    .returning({ id: session.id, rotation: session.rotation });
  if (!row) throw new Error('The session could not be kept.');
  return { sessionId: row.id, rotation: row.rotation, expiresAt };
}

/** Renews a session's cookie. @returns the new rotation, or null where another request was first */
export async function rotateSession(
  db: Database,
  sessionId: string,
  rotation: number,
  now: Date,
): Promise<number | null> {
  const [row] = await db
    .update(session)
    .set({ rotation: sql`${session.rotation} + 1`, rotatedAt: now })
    .where(
      and(eq(session.id, sessionId), eq(session.rotation, rotation), isNull(session.revokedAt)),
    )
    .returning({ rotation: session.rotation });
  return row?.rotation ?? null;
}

/** Ends one session at once. */
export async function revokeSession(db: Database, sessionId: string, now: Date): Promise<void> {
  await db.update(session).set({ revokedAt: now }).where(eq(session.id, sessionId));
}

/** Ends every session of a person at once. */
export async function revokeSessionsOf(db: Database, personId: number, now: Date): Promise<void> {
  await db
    .update(session)
    .set({ revokedAt: now })
    .where(and(eq(session.personId, personId), isNull(session.revokedAt)));
}
