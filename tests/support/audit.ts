import { and, asc, eq } from 'drizzle-orm';
import { auditEntry } from '../../server/db/schema/audit.ts';
import type { TestApp } from './app.ts';

/** What the audit trail holds of an action, oldest first, read past row-level security. */
export const auditOf = (test: TestApp, action: string, subjectId: number) =>
  test.migrating
    .select()
    .from(auditEntry)
    .where(and(eq(auditEntry.action, action), eq(auditEntry.subjectId, String(subjectId))))
    .orderBy(asc(auditEntry.id));
