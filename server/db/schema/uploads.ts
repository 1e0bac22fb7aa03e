import { sql } from 'drizzle-orm';
import {
  bigint,
  bigserial,
  boolean,
  date,
  foreignKey,
  index,
  integer,
  jsonb,
  numeric,
  pgEnum,
  pgTable,
  primaryKey,
  smallint,
  text,
  uniqueIndex,
  type AnyPgColumn,
} from 'drizzle-orm/pg-core';
import { accessKey, person } from './people.ts';
import { bytes, instant, plainText, tenantColumns, tenantPolicy } from './columns.ts';
import { toSite } from './sites.ts';

export const uploadStatus = pgEnum('upload_status', [
  'receiving',
  'waiting',
  'reading',
  'loading',
  'loaded',
  'failed',
  'withdrawn',
]);

/** One file as it was handed over. `id` grows in order of receipt, which decides whose word is later. */
export const upload = pgTable(
  'upload',
  {
    ...tenantColumns(),
    id: integer().notNull().generatedAlwaysAsIdentity(),
    status: uploadStatus().notNull(),
    fileName: text().notNull(),
    byteSize: bigint({ mode: 'number' }).notNull().default(0),
    sha256: text(),
    /** The column plan as it was asked for, and as it was resolved and used. */
    planGiven: jsonb(),
    plan: jsonb(),
    /** What the file turned out to be: delimited text, a workbook, an event log in XES. */
    fileKind: text(),
    receivedAt: instant().notNull(),
    receivedBy: integer().references(() => person.id),
    receivedKey: integer().references(() => accessKey.id),
    progressRows: bigint({ mode: 'number' }).notNull().default(0),
    progressBytes: bigint({ mode: 'number' }).notNull().default(0),
    /** The row account, once it is closed. */
    account: jsonb(),
    /** Why it failed: {code, detail}. */
    error: jsonb(),
    /** Latest accepted time anywhere in the file: up to there it speaks for the areas in it. */
    latestAt: instant(),
    /** How often work on it was begun: after a few deaths of the server it is given up. */
    attempts: integer().notNull().default(0),
    stopRequestedAt: instant(),
    withdrawRequestedAt: instant(),
    finishedAt: instant(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    index('upload_waiting')
      .on(table.siteId)
      .where(
        sql`status in ('waiting', 'reading', 'loading') or (withdraw_requested_at is not null and status <> 'withdrawn')`,
      ),
    toSite(table),
    tenantPolicy(),
  ],
).enableRLS();

const toUpload = (table: {
  organisationId: AnyPgColumn;
  siteId: AnyPgColumn;
  uploadId: AnyPgColumn;
}) =>
  foreignKey({
    columns: [table.organisationId, table.siteId, table.uploadId],
    foreignColumns: [upload.organisationId, upload.siteId, upload.id],
  }).onDelete('cascade');

/** The original file, gzipped and in pieces: one backup holds everything, any server can read it. */
export const uploadChunk = pgTable(
  'upload_chunk',
  {
    ...tenantColumns(),
    uploadId: integer().notNull(),
    number: integer().notNull(),
    bytes: bytes().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.uploadId, table.number] }),
    toUpload(table),
    tenantPolicy(),
  ],
).enableRLS();

/** For which areas an upload speaks, and over which span. */
export const uploadArea = pgTable(
  'upload_area',
  {
    ...tenantColumns(),
    uploadId: integer().notNull(),
    areaId: integer().notNull(),
    rows: integer().notNull(),
    firstAt: instant().notNull(),
    latestAt: instant().notNull(),
    /** Latest accepted time anywhere in the upload: up to there it speaks for this area. */
    speaksUntil: instant().notNull(),
    /** Whether any of its rows here carries a quantity, or a start. */
    hasQuantities: boolean().notNull(),
    hasStarts: boolean().notNull(),
    /** The span, both ends in it, for which the file is the whole truth here; null where it adds to others. */
    replacesFrom: instant(),
    replacesUntil: instant(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.uploadId, table.areaId] }),
    toUpload(table),
    tenantPolicy(),
  ],
).enableRLS();

/** What a row may say beside its job, area and times; null where it does not say it. */
export const toldColumns = () => ({
  recordKey: plainText(),
  quantity: numeric(),
  family: text(),
  due: instant(),
  priority: text(),
  workContent: numeric(),
  value: numeric(),
  resource: text(),
  status: text(),
  /** `scrapped` or `cancelled`: the stay ended, and not as a good departure. */
  ending: text(),
  parent: text(),
});

/**
 * Every accepted row as told, of every upload that was not withdrawn: the versions of the records.
 * `part` tells apart the pairs of columns of one row; `event` is set where the row told one event.
 */
export const uploadRow = pgTable(
  'upload_row',
  {
    ...tenantColumns(),
    jobKey: plainText().notNull(),
    uploadId: integer().notNull(),
    line: integer().notNull(),
    part: smallint().notNull().default(0),
    areaId: integer().notNull(),
    arrived: instant(),
    started: instant(),
    finished: instant(),
    /** Which of the three times an event told; null where the row told a stay. */
    event: text(),
    /** Of an event at a local time that occurs twice, the second moment. */
    secondReading: instant(),
    ...toldColumns(),
  },
  (table) => [
    primaryKey({
      columns: [
        table.organisationId,
        table.siteId,
        table.jobKey,
        table.uploadId,
        table.line,
        table.part,
      ],
    }),
    index('upload_row_of_upload').using('brin', table.siteId, table.uploadId),
    index('upload_row_by_record_key')
      .on(table.organisationId, table.siteId, table.recordKey)
      .where(sql`record_key is not null`),
    tenantPolicy(),
  ],
).enableRLS();

/** A row that was not accepted, as it came, with the reason. */
export const refusedRow = pgTable(
  'refused_row',
  {
    ...tenantColumns(),
    uploadId: integer().notNull(),
    id: bigserial({ mode: 'number' }).notNull(),
    line: integer().notNull(),
    part: smallint().notNull().default(0),
    reason: text().notNull(),
    detail: text().notNull(),
    raw: text().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.uploadId, table.id] }),
    toUpload(table),
    tenantPolicy(),
  ],
).enableRLS();

/** A saved reading of one kind of export, recognised by its header. */
export const columnPlan = pgTable(
  'column_plan',
  {
    ...tenantColumns(),
    id: integer().notNull().generatedAlwaysAsIdentity(),
    name: text().notNull(),
    headerFingerprint: text().notNull(),
    plan: jsonb().notNull(),
    savedBy: integer().references(() => person.id),
    savedAt: instant().notNull(),
    retiredOn: date(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    uniqueIndex('column_plan_name_once')
      .on(table.organisationId, table.siteId, sql`lower(${table.name})`)
      .where(sql`${table.retiredOn} is null`),
    toSite(table),
    tenantPolicy(),
  ],
).enableRLS();
