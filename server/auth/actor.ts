import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { roles, type Role } from '../../shared/permissions.ts';
import type { Database } from '../db/client.ts';
import { hashAccessKey } from './access-key.ts';
import { rotationGraceMs } from './sessions.ts';
import type { SessionToken } from './session-cookie.ts';

/** Who makes a request, and what they are where it goes. */
export type Actor =
  | {
      kind: 'person';
      personId: number;
      email: string;
      name: string;
      sessionId: string;
      rotation: number;
      rotatedAt: Date;
      expiresAt: Date;
      /** Role in the organisation of the site in the path; null where it has none, or no site is named. */
      role: Role | null;
    }
  | { kind: 'machine'; accessKeyId: number; organisationId: number; siteId: number }
  | { kind: 'stranger' };

/** Who did something, as far as the audit trail tells it. */
export type Doer =
  | { kind: 'person'; personId: number }
  | { kind: 'machine'; accessKeyId: number }
  | { kind: 'stranger' };

/** The organisation of the site in the path, where there is one, and the version of its figures. */
export interface SiteOfRequest {
  organisationId: number;
  siteId: number;
}

const personRow = z.object({
  person_id: z.number(),
  email: z.string(),
  name: z.string(),
  rotation: z.number(),
  rotated_at: z.coerce.date(),
  expires_at: z.coerce.date(),
  organisation_id: z.number().nullable(),
  role: z.enum(roles).nullable(),
});

/**
 * Who holds a session, and their role at a site, in one look-up.
 *
 * @returns null where the session is over, revoked, or the token was renewed longer ago than the grace
 */
export async function findPerson(
  db: Database,
  token: SessionToken,
  siteId: number | null,
  now: Date,
): Promise<{ actor: Actor & { kind: 'person' }; site: SiteOfRequest | null } | null> {
  const { rows } = await db.execute(sql`/* who asks */
    select
      person.id as person_id, person.email, person.name,
      session.rotation, session.rotated_at, session.expires_at,
      site_directory.organisation_id, membership.role
    from session
    join person on person.id = session.person_id
    left join site_directory on site_directory.site_id = ${siteId}::integer
    left join membership
      on membership.organisation_id = site_directory.organisation_id
      and membership.person_id = person.id
      and (membership.ends_at is null or membership.ends_at > ${now.toISOString()}::timestamptz)
    where session.id = ${token.sessionId}::uuid
      and session.revoked_at is null
      and session.expires_at > ${now.toISOString()}::timestamptz`);
  const [first] = rows;
  if (!first) return null;
  const row = personRow.parse(first);
  if (!isCurrent(row, token, now)) return null;
  return {
    actor: {
      kind: 'person',
      personId: row.person_id,
      email: row.email,
      name: row.name,
      sessionId: token.sessionId,
      rotation: row.rotation,
      rotatedAt: row.rotated_at,
      expiresAt: row.expires_at,
      role: row.role,
    },
    site:
      siteId !== null && row.organisation_id !== null && row.role !== null
        ? { siteId, organisationId: row.organisation_id }
        : null,
  };
}

function isCurrent(
  row: { rotation: number; rotated_at: Date },
  token: SessionToken,
  now: Date,
): boolean {
  if (token.rotation === row.rotation) return true;
  const renewed = now.getTime() - row.rotated_at.getTime();
  return token.rotation === row.rotation - 1 && renewed <= rotationGraceMs;
}

const keyRow = z.object({
  id: z.number(),
  organisation_id: z.number(),
  site_id: z.number(),
});

/** The machine that holds an access key, or null where the key is unknown, expired or revoked. */
export async function findMachine(
  db: Database,
  key: string,
  now: Date,
): Promise<(Actor & { kind: 'machine' }) | null> {
  const { rows } = await db.execute(sql`/* which machine asks */
    select id, organisation_id, site_id from access_key
    where key_hash = ${hashAccessKey(key)} and revoked_at is null
      and (expires_at is null or expires_at > ${now.toISOString()}::timestamptz)`);
  const [first] = rows;
  if (!first) return null;
  const row = keyRow.parse(first);
  await db.execute(sql`/* last use of a key, to the minute */
    update access_key set last_used_at = ${now.toISOString()}::timestamptz
    where id = ${row.id}
      and (
        last_used_at is null
        or last_used_at < ${now.toISOString()}::timestamptz - interval '1 minute'
      )`);
  return {
    kind: 'machine',
    accessKeyId: row.id,
    organisationId: row.organisation_id,
    siteId: row.site_id,
  };
}
