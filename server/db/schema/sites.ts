import {
  bigint,
  date,
  foreignKey,
  integer,
  numeric,
  pgEnum,
  pgTable,
  primaryKey,
  smallint,
  text,
  unique,
  type AnyPgColumn,
} from 'drizzle-orm/pg-core';
import { organisation } from './people.ts';
import { instant, tenantColumns, tenantPolicy } from './columns.ts';

export const lostFinish = pgEnum('lost_finish', ['infer', 'leave-open']);

/** Which organisation a site belongs to: read before the tenant is known, later also on which server it lies. */
export const siteDirectory = pgTable('site_directory', {
  siteId: integer().primaryKey().generatedAlwaysAsIdentity(),
  organisationId: integer()
    .notNull()
    .references(() => organisation.id, { onDelete: 'cascade' }),
});

export const site = pgTable(
  'site',
  {
    organisationId: integer().notNull(),
    id: integer().notNull(),
    name: text().notNull(),
    timeZone: text().notNull(),
    currency: text().notNull().default('EUR'),
    valuePerJob: numeric(),
    /** What holding a job for a year costs, as a share of its value. */
    carryingShare: numeric(),
    lostFinish: lostFinish().notNull().default('infer'),
    newPassAfterDays: integer().notNull().default(90),
    /** Grows with every change of figures; answers are cached under it. */
    dataVersion: bigint({ mode: 'number' }).notNull().default(0),
    /** Set when figures changed from which findings are made; cleared once the findings agree. */
    findingsRequestedAt: instant(),
    /** A rise smaller than this share of its level, or than so many jobs, is no finding; null for the usual. */
    worthwhileRiseShare: numeric(),
    worthwhileRiseJobs: numeric(),
    /** Set when a setting changed on which every stay depends; cleared once all are derived again. */
    rebuildRequestedAt: instant(),
    createdAt: instant().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.id] }),
    unique('site_name_once').on(table.organisationId, table.name),
    foreignKey({
      columns: [table.id],
      foreignColumns: [siteDirectory.siteId],
    }).onDelete('cascade'),
    tenantPolicy(),
  ],
).enableRLS();

/** Foreign key of a tenant table to its site; the organisation travels along. */
export const toSite = (table: { organisationId: AnyPgColumn; siteId: AnyPgColumn }) =>
  foreignKey({
    columns: [table.organisationId, table.siteId],
    foreignColumns: [site.organisationId, site.id],
  }).onDelete('cascade');

/** Shifts of the site's week, in minutes of the local day; `validFrom` dates a change of the pattern. */
export const shift = pgTable(
  'shift',
  {
    ...tenantColumns(),
    id: integer().notNull().generatedAlwaysAsIdentity(),
    weekday: smallint().notNull(),
    startMinute: smallint().notNull(),
    endMinute: smallint().notNull(),
    validFrom: date().notNull(),
    validUntil: date(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    toSite(table),
    tenantPolicy(),
  ],
).enableRLS();

/** Days on which the site does not work, whatever its shifts say. */
export const closure = pgTable(
  'closure',
  {
    ...tenantColumns(),
    day: date().notNull(),
    name: text().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.day] }),
    toSite(table),
    tenantPolicy(),
  ],
).enableRLS();
