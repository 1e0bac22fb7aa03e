import { sql, type SQLWrapper } from 'drizzle-orm';
import { check, date, integer, numeric, pgTable, primaryKey } from 'drizzle-orm/pg-core';
import { instant, plainText, tenantColumns, tenantPolicy } from './columns.ts';
import { toZone } from './zones.ts';

/** The levels that are kept of a zone. */
export type Measure = 'inside_jobs' | 'in_process_jobs' | 'inside_units' | 'in_process_units';

/**
 * Texts, not an enumeration: PostgreSQL trusts the comparison of texts under row-level security and looks
 * them up in an index, but compares enumerated values row by row.
 */
const measureColumn = () => plainText().$type<Measure>().notNull();
const knownMeasure = (name: string, table: { measure: SQLWrapper }) =>
  check(
    name,
    sql`${table.measure} in ('inside_jobs', 'in_process_jobs', 'inside_units', 'in_process_units')`,
  );

/**
 * What happened to a level within one local hour; hours without a change have no row.
 * Offsets are microseconds from the hour's start, summed over the changes, so that integrals are exact.
 */
export const levelHour = pgTable(
  'level_hour',
  {
    ...tenantColumns(),
    zoneId: integer().notNull(),
    measure: measureColumn(),
    hour: instant().notNull(),
    ups: numeric().notNull(),
    downs: numeric().notNull(),
    upOffset: numeric().notNull(),
    downOffset: numeric().notNull(),
    /** Highest level within the hour, less the level just before it. */
    highest: numeric().notNull(),
  },
  (table) => [
    primaryKey({
      columns: [table.organisationId, table.siteId, table.zoneId, table.measure, table.hour],
    }),
    knownMeasure('level_hour_measure', table),
    toZone(table),
    tenantPolicy(),
  ],
).enableRLS();

/** The same over one local day, with the level at its start; days without a change have no row. */
export const levelDay = pgTable(
  'level_day',
  {
    ...tenantColumns(),
    zoneId: integer().notNull(),
    measure: measureColumn(),
    day: date().notNull(),
    starts: instant().notNull(),
    ends: instant().notNull(),
    levelStart: numeric().notNull(),
    levelEnd: numeric().notNull(),
    ups: numeric().notNull(),
    downs: numeric().notNull(),
    /** ∫ level dt over the day, in unit-microseconds. */
    integral: numeric().notNull(),
    peak: numeric().notNull(),
  },
  (table) => [
    primaryKey({
      columns: [table.organisationId, table.siteId, table.zoneId, table.measure, table.day],
    }),
    knownMeasure('level_day_measure', table),
    toZone(table),
    tenantPolicy(),
  ],
).enableRLS();

/** Departures within a span: sums of their times and a histogram in logarithmic bins of ratio 1.02. */
const departureColumns = () => ({
  departures: integer().notNull(),
  flowMicroseconds: numeric().notNull(),
  queueKnown: integer().notNull(),
  queueMicroseconds: numeric().notNull(),
  processKnown: integer().notNull(),
  processMicroseconds: numeric().notNull(),
  bins: integer().array().notNull(),
  counts: integer().array().notNull(),
});

/** The departures of one local day. */
export const flowDay = pgTable(
  'flow_day',
  {
    ...tenantColumns(),
    zoneId: integer().notNull(),
    day: date().notNull(),
    starts: instant().notNull(),
    ...departureColumns(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.zoneId, table.day] }),
    toZone(table),
    tenantPolicy(),
  ],
).enableRLS();

/** The departures of one local month, made from its days: long periods have few rows to read. */
export const flowMonth = pgTable(
  'flow_month',
  {
    ...tenantColumns(),
    zoneId: integer().notNull(),
    /** First day of the month. */
    month: date().notNull(),
    ...departureColumns(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.zoneId, table.month] }),
    toZone(table),
    tenantPolicy(),
  ],
).enableRLS();
