import { sql } from 'drizzle-orm';
import {
  boolean,
  check,
  foreignKey,
  index,
  integer,
  jsonb,
  pgEnum,
  pgTable,
  primaryKey,
  text,
} from 'drizzle-orm/pg-core';
import { instant, tenantColumns, tenantPolicy } from './columns.ts';
import { person } from './people.ts';
import { toSite } from './sites.ts';
import { toZone } from './zones.ts';

export const findingKind = pgEnum('finding_kind', [
  'rising',
  'falling',
  'cap-exceeded',
  'held-undeclared',
  'lost-finishes',
  'stale-jobs',
  'count-mismatch',
]);
export const findingStatus = pgEnum('finding_status', ['open', 'taken-up', 'explained', 'closed']);

/** A dated statement that something in a zone needs a person; one per zone, kind and episode. */
export const finding = pgTable(
  'finding',
  {
    ...tenantColumns(),
    id: integer().notNull().generatedAlwaysAsIdentity(),
    kind: findingKind().notNull(),
    /** Null for a run of areas that is no zone yet: `areaIds` says which. */
    zoneId: integer(),
    areaIds: integer().array().notNull(),
    status: findingStatus().notNull().default('open'),
    /** Whether the data show it now; where not, it has ended, or was of data since withdrawn. */
    isPresent: boolean().notNull().default(true),
    assigneeId: integer().references(() => person.id),
    /** Since when it is so, in the plant's time. */
    onset: instant().notNull(),
    /** Data-until of the latest look that found it. */
    seenUntil: instant().notNull(),
    /** Figures of its kind: what applies of a trend, and the rest of its evidence. */
    trend: jsonb(),
    evidence: jsonb().notNull(),
    foundAt: instant().notNull(),
    changedAt: instant().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    index('finding_by_zone').on(table.siteId, table.zoneId, table.kind),
    toSite(table),
    toZone(table),
    tenantPolicy(),
  ],
).enableRLS();

/** What happened to a finding, in order: found, grown, taken up, explained, closed, reopened, commented. */
export const findingAct = pgTable(
  'finding_act',
  {
    ...tenantColumns(),
    findingId: integer().notNull(),
    id: integer().notNull().generatedAlwaysAsIdentity(),
    at: instant().notNull(),
    /** Null for what it did by itself. */
    personId: integer().references(() => person.id),
    act: text().notNull(),
    note: text().notNull().default(''),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.findingId, table.id] }),
    foreignKey({
      columns: [table.organisationId, table.siteId, table.findingId],
      foreignColumns: [finding.organisationId, finding.siteId, finding.id],
    }).onDelete('cascade'),
    check(
      'finding_act_known',
      sql`${table.act} in ('found', 'ended', 'returned', 'taken-up', 'explained', 'closed', 'reopened', 'assigned', 'commented')`,
    ),
    tenantPolicy(),
  ],
).enableRLS();
