import {
  bigint,
  boolean,
  integer,
  numeric,
  pgTable,
  primaryKey,
  smallint,
  text,
  timestamp,
} from 'drizzle-orm/pg-core';
import { instant, plainText, tenantColumns, tenantPolicy } from './columns.ts';
import { toldColumns } from './uploads.ts';

/**
 * The current record of a job at an area: its versions (upload_row) merged, with the stay in the
 * area's zone in its own columns. Derived: a rebuild makes the same rows again.
 */
export const record = pgTable(
  'record',
  {
    ...tenantColumns(),
    jobKey: plainText().notNull(),
    /** Place among the job's records: by start, else arrival, else finish; then finish; then line. */
    ordinal: integer().notNull(),
    areaId: integer().notNull(),
    pass: integer().notNull(),
    arrived: instant(),
    started: instant(),
    finished: instant(),
    ...toldColumns(),
    /** The first row of a file that told it as it now stands, else the last that told of it. */
    uploadId: integer().notNull(),
    line: integer().notNull(),
    part: smallint().notNull(),
    /** When the job came, as far as it is known: arrival, else previous finish, else start. */
    entered: instant(),
    /** Finish, or the later start from which a lost finish was inferred; null while open. */
    leftAt: instant(),
    finishInferred: boolean().notNull(),
    /** From when the area's zone counts it (`countsFrom`); null where it is no stay there. */
    stayFrom: instant(),
    /** ⌈log₄ of the stay's seconds⌉, 99 while open: bounds every look-up by time. */
    lengthClass: smallint(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.jobKey, table.ordinal] }),
    tenantPolicy(),
  ],
).enableRLS();

/** Stays of zones of several areas: loops and the site. An area's stays are columns of its records. */
export const stay = pgTable(
  'stay',
  {
    ...tenantColumns(),
    jobKey: plainText().notNull(),
    zoneId: integer().notNull(),
    /** Place among the job's stays in the zone. */
    ordinal: integer().notNull(),
    entered: instant().notNull(),
    started: instant(),
    leftAt: instant(),
    lengthClass: smallint().notNull(),
    /** Length of the union of the process intervals; null where the log does not hold it. */
    processMicroseconds: bigint({ mode: 'number' }),
    /** The process intervals, disjoint and in order; the last end is null while in process. */
    processFrom: timestamp({ withTimezone: true }).array().notNull(),
    processTo: timestamp({ withTimezone: true }).array().notNull(),
    quantity: numeric(),
    finishInferred: boolean().notNull(),
    /** `scrapped` or `cancelled` where the job's last record in the zone ended so. */
    ending: text(),
    uploadId: integer().notNull(),
    line: integer().notNull(),
  },
  (table) => [
    primaryKey({
      columns: [table.organisationId, table.siteId, table.jobKey, table.zoneId, table.ordinal],
    }),
    tenantPolicy(),
  ],
).enableRLS();
