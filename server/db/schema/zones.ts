import {
  boolean,
  foreignKey,
  integer,
  numeric,
  pgEnum,
  pgTable,
  primaryKey,
  text,
  unique,
  type AnyPgColumn,
} from 'drizzle-orm/pg-core';
import { person } from './people.ts';
import { instant, tenantColumns, tenantPolicy } from './columns.ts';
import { toSite } from './sites.ts';

export const zoneKind = pgEnum('zone_kind', ['area', 'loop', 'site']);
export const countsFrom = pgEnum('counts_from', ['arrival', 'start']);
export const zoneState = pgEnum('zone_state', ['ready', 'deriving']);
export const figureUnit = pgEnum('figure_unit', ['jobs', 'units']);
export const spellingOrigin = pgEnum('spelling_origin', ['declared', 'found']);
export const zoneFactKind = pgEnum('zone_fact_kind', ['servers', 'owner', 'position', 'value']);

/** Anything whose WIP is measured. Area zones and the site zone arise by themselves. */
export const zone = pgTable(
  'zone',
  {
    ...tenantColumns(),
    id: integer().notNull().generatedAlwaysAsIdentity(),
    kind: zoneKind().notNull(),
    name: text().notNull(),
    countsFrom: countsFrom().notNull().default('arrival'),
    state: zoneState().notNull().default('ready'),
    /** Share of its derivation that is done, while it is deriving. */
    progress: numeric().notNull().default('0'),
    /** Latest moment for which the zone's data speak. */
    dataUntil: instant(),
    /** First moment of the zone's data, and the end of its warm-up. */
    dataFrom: instant(),
    warmUntil: instant(),
    /** Whether the log holds any start here: without one, waiting and in process cannot be told apart. */
    hasStarts: boolean().notNull().default(false),
    /** Whether any record here carries a quantity; without one, units are jobs. */
    hasQuantities: boolean().notNull().default(false),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    toSite(table),
    tenantPolicy(),
  ],
).enableRLS();

/** Foreign key of a tenant table to a zone of its site. */
export const toZone = (table: {
  organisationId: AnyPgColumn;
  siteId: AnyPgColumn;
  zoneId: AnyPgColumn;
}) =>
  foreignKey({
    columns: [table.organisationId, table.siteId, table.zoneId],
    foreignColumns: [zone.organisationId, zone.siteId, zone.id],
  }).onDelete('cascade');

/** An area is the zone with the same id. */
export const area = pgTable(
  'area',
  {
    ...tenantColumns(),
    id: integer().notNull(),
    /** Place in the flow; areas that work side by side share one. */
    position: integer().notNull(),
    origin: spellingOrigin().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    foreignKey({
      columns: [table.organisationId, table.siteId, table.id],
      foreignColumns: [zone.organisationId, zone.siteId, zone.id],
    }).onDelete('cascade'),
    tenantPolicy(),
  ],
).enableRLS();

/** Every way in which an area's name was written, folded; each names one area. */
export const areaSpelling = pgTable(
  'area_spelling',
  {
    ...tenantColumns(),
    /** Trimmed, case-folded, inner blanks made one, Unicode NFC. */
    folded: text().notNull(),
    asWritten: text().notNull(),
    areaId: integer().notNull(),
    origin: spellingOrigin().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.folded] }),
    foreignKey({
      columns: [table.organisationId, table.siteId, table.areaId],
      foreignColumns: [area.organisationId, area.siteId, area.id],
    }).onDelete('cascade'),
    tenantPolicy(),
  ],
).enableRLS();

/**
 * Rows told of one area that count for another: all of them, or from a moment on. Two spellings of one area
 * are merged so, and an area that was given another name from a day on; taking the move back undoes it.
 */
export const areaMove = pgTable(
  'area_move',
  {
    ...tenantColumns(),
    id: integer().notNull().generatedAlwaysAsIdentity(),
    areaId: integer().notNull(),
    targetAreaId: integer().notNull(),
    /** Rows whose start (arrival, else finish, where there is none) is not before it; null for all rows. */
    validFrom: instant(),
    movedBy: integer().references(() => person.id),
    movedAt: instant().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    unique('area_move_once')
      .on(table.organisationId, table.siteId, table.areaId, table.validFrom)
      .nullsNotDistinct(),
    foreignKey({
      name: 'area_move_from',
      columns: [table.organisationId, table.siteId, table.areaId],
      foreignColumns: [area.organisationId, area.siteId, area.id],
    }).onDelete('cascade'),
    foreignKey({
      name: 'area_move_to',
      columns: [table.organisationId, table.siteId, table.targetAreaId],
      foreignColumns: [area.organisationId, area.siteId, area.id],
    }),
    tenantPolicy(),
  ],
).enableRLS();

/** The areas of a loop. The site zone has every area without being listed here. */
export const zoneArea = pgTable(
  'zone_area',
  {
    ...tenantColumns(),
    zoneId: integer().notNull(),
    areaId: integer().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.zoneId, table.areaId] }),
    toZone(table),
    foreignKey({
      columns: [table.organisationId, table.siteId, table.areaId],
      foreignColumns: [area.organisationId, area.siteId, area.id],
    }).onDelete('cascade'),
    tenantPolicy(),
  ],
).enableRLS();

/** What is true of a zone from a moment on, until the next fact of the same kind. */
export const zoneFact = pgTable(
  'zone_fact',
  {
    ...tenantColumns(),
    zoneId: integer().notNull(),
    kind: zoneFactKind().notNull(),
    validFrom: instant().notNull(),
    amount: numeric(),
    personId: integer().references(() => person.id),
  },
  (table) => [
    primaryKey({
      columns: [table.organisationId, table.siteId, table.zoneId, table.kind, table.validFrom],
    }),
    toZone(table),
    tenantPolicy(),
  ],
).enableRLS();

/** A declared hard limit on WIP; it holds until the zone's next one. A null limit lifts the cap. */
export const cap = pgTable(
  'cap',
  {
    ...tenantColumns(),
    id: integer().notNull().generatedAlwaysAsIdentity(),
    zoneId: integer().notNull(),
    limit: numeric(),
    unit: figureUnit().notNull(),
    validFrom: instant().notNull(),
    note: text().notNull().default(''),
    declaredBy: integer().references(() => person.id),
    declaredAt: instant().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    toZone(table),
    tenantPolicy(),
  ],
).enableRLS();
