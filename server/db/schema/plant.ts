import {
  boolean,
  foreignKey,
  index,
  integer,
  pgEnum,
  pgTable,
  primaryKey,
  text,
} from 'drizzle-orm/pg-core';
import { instant, plainText, tenantColumns, tenantPolicy } from './columns.ts';
import { person } from './people.ts';
import { toSite } from './sites.ts';
import { area, toZone } from './zones.ts';

export const plantEventKind = pgEnum('plant_event_kind', [
  'holiday',
  'stocktake',
  'ramp-up',
  'breakdown',
  'other',
]);

/** Something that happened in the plant, half-open: tests leave its days out, or name them. */
export const plantEvent = pgTable(
  'plant_event',
  {
    ...tenantColumns(),
    id: integer().notNull().generatedAlwaysAsIdentity(),
    kind: plantEventKind().notNull(),
    name: text().notNull(),
    startsAt: instant().notNull(),
    endsAt: instant().notNull(),
    /** The zone that it concerns; null for the whole site. */
    zoneId: integer(),
    /** Whether tests leave its days out; else they only name them. */
    leaveOut: boolean().notNull(),
    enteredBy: integer().references(() => person.id),
    enteredAt: instant().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    toSite(table),
    toZone(table),
    tenantPolicy(),
  ],
).enableRLS();

/**
 * A job's open records at an area that end as of a moment, because a person says that the job is not there.
 * A finish that is told later outweighs it. Taking it back restores what the log says.
 */
export const writeOff = pgTable(
  'write_off',
  {
    ...tenantColumns(),
    id: integer().notNull().generatedAlwaysAsIdentity(),
    jobKey: plainText().notNull(),
    areaId: integer().notNull(),
    asOf: instant().notNull(),
    reason: text().notNull(),
    madeBy: integer().references(() => person.id),
    madeAt: instant().notNull(),
    /** Set once records and levels agree with it. */
    appliedAt: instant(),
    /** Asked to be taken back; the row goes once records and levels agree with that. */
    takenBackAt: instant(),
    takenBackBy: integer().references(() => person.id),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    index('write_off_of_job').on(table.siteId, table.jobKey),
    foreignKey({
      columns: [table.organisationId, table.siteId, table.areaId],
      foreignColumns: [area.organisationId, area.siteId, area.id],
    }).onDelete('cascade'),
    tenantPolicy(),
  ],
).enableRLS();
