import { bigint, index, integer, jsonb, pgTable, primaryKey, text } from 'drizzle-orm/pg-core';
import { instant, tenantPolicy } from './columns.ts';

/** Who did what to which thing, with its state before and after. Rows are only ever added. */
export const auditEntry = pgTable(
  'audit_entry',
  {
    organisationId: integer().notNull(),
    /** 0 where the act concerns the organisation as a whole. */
    siteId: integer().notNull().default(0),
    id: bigint({ mode: 'number' }).notNull().generatedAlwaysAsIdentity(),
    at: instant().notNull(),
    /** A person or a machine's key; both null for what the product did by itself. */
    personId: integer(),
    accessKeyId: integer(),
    action: text().notNull(),
    subjectKind: text().notNull(),
    subjectId: text().notNull(),
    before: jsonb(),
    after: jsonb(),
    requestId: text(),
  },
  (table) => [
    primaryKey({ columns: [table.organisationId, table.siteId, table.id] }),
    index('audit_entry_by_time').on(table.organisationId, table.at),
    tenantPolicy(),
  ],
).enableRLS();
