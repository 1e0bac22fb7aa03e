import {
  bigint,
  index,
  integer,
  pgEnum,
  pgTable,
  primaryKey,
  text,
  uuid,
} from 'drizzle-orm/pg-core';
import { instant } from './columns.ts';

/** People and organisations lie outside row-level security: they are read before a tenant is known. */
export const memberRole = pgEnum('member_role', ['admin', 'analyst', 'supervisor', 'consultant']);

export const organisation = pgTable('organisation', {
  id: integer().primaryKey().generatedAlwaysAsIdentity(),
  name: text().notNull(),
  createdAt: instant().notNull(),
});

export const person = pgTable('person', {
  id: integer().primaryKey().generatedAlwaysAsIdentity(),
  /** Trimmed and in lower case: an address signs in however it is typed. */
  email: text().notNull().unique(),
  name: text().notNull(),
  passwordHash: text().notNull(),
  passwordChangedAt: instant().notNull(),
  createdAt: instant().notNull(),
});

export const membership = pgTable(
  'membership',
  {
    organisationId: integer()
      .notNull()
      .references(() => organisation.id, { onDelete: 'cascade' }),
    personId: integer()
      .notNull()
      .references(() => person.id, { onDelete: 'cascade' }),
    role: memberRole().notNull(),
    /** From this moment on the membership gives no access; null where it has no end. */
    endsAt: instant(),
    createdAt: instant().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.personId] }),
    index('membership_of_person').on(table.personId),
  ],
);

export const session = pgTable(
  'session',
  {
    id: uuid().primaryKey().defaultRandom(),
    personId: integer()
      .notNull()
      .references(() => person.id, { onDelete: 'cascade' }),
    createdAt: instant().notNull(),
    /** When the cookie was last renewed, and how often: an older cookie is refused after a short grace. */
    rotatedAt: instant().notNull(),
    rotation: integer().notNull().default(0),
    expiresAt: instant().notNull(),
    revokedAt: instant(),
  },
  (table) => [index('session_of_person').on(table.personId)],
);

/** Keys of machines; only a hash is kept. Each may upload to one site and read that site's uploads. */
export const accessKey = pgTable('access_key', {
  id: integer().primaryKey().generatedAlwaysAsIdentity(),
  organisationId: integer()
    .notNull()
    .references(() => organisation.id, { onDelete: 'cascade' }),
  siteId: integer().notNull(),
  name: text().notNull(),
  keyHash: text().notNull().unique(),
  createdBy: integer().references(() => person.id),
  createdAt: instant().notNull(),
  /** From then on it opens nothing; null where it does not expire. */
  expiresAt: instant(),
  /** To the minute. */
  lastUsedAt: instant(),
  revokedAt: instant(),
});

/** Failed sign-ins by address and by origin, in the shape that the rate limiter keeps. */
export const signInThrottle = pgTable('sign_in_throttle', {
  key: text().primaryKey(),
  points: integer().notNull().default(0),
  expire: bigint({ mode: 'number' }),
});

/** Random secrets shared by all server processes; granted to the migrating role only. */
export const serverSecret = pgTable('server_secret', {
  name: text().primaryKey(),
  value: text().notNull(),
});
