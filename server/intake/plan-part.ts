import { and, eq, isNull } from 'drizzle-orm';
import { columnPlanSchema, type ColumnPlan } from '../../shared/contracts/plan.ts';
import type { Problem } from '../../shared/errors.ts';
import type { Database } from '../db/client.ts';
import { columnPlan } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';
import { ApiError } from '../errors.ts';
import { IntakeFailure } from './failure.ts';
import { compileTimePattern } from './times/time-pattern.ts';

const wrongPlan = 'The column plan was not understood.';

/**
 * The column plan that came with a file: as JSON, or as the id of a saved plan of the site.
 *
 * @param part the text as it came; undefined or blank where none did
 * @throws ApiError with everything that is wrong with it
 */
export async function readPlanPart(
  db: Database,
  site: { organisationId: number; siteId: number },
  part: string | undefined,
): Promise<ColumnPlan | null> {
  const text = part?.trim() ?? '';
  if (text === '') return null;
  return /^\d{1,9}$/.test(text) ? readSavedPlan(db, site, Number(text)) : parsePlan(text);
}

async function readSavedPlan(
  db: Database,
  { organisationId, siteId }: { organisationId: number; siteId: number },
  id: number,
): Promise<ColumnPlan> {
  const [saved] = await withTenant(db, organisationId, (tx) =>
    tx
      .select({ plan: columnPlan.plan })
      .from(columnPlan)
      .where(
        and(
          eq(columnPlan.organisationId, organisationId),
          eq(columnPlan.siteId, siteId),
          eq(columnPlan.id, id),
          isNull(columnPlan.retiredOn),
        ),
      ),
  );
  if (saved) return checkPlan(saved.plan);
  throw refuse([{ field: 'plan', message: `The site has no saved column plan ${id}.` }]);
}

function parsePlan(text: string): ColumnPlan {
  let told: unknown;
  try {
    told = JSON.parse(text);
  } catch {
    throw refuse([
      { field: 'plan', message: 'Give the column plan as JSON, or as the id of a saved one.' },
    ]);
  }
  return checkPlan(told);
}

function checkPlan(told: unknown): ColumnPlan {
  const checked = columnPlanSchema.safeParse(told);
  if (!checked.success) {
    throw refuse(
      checked.error.issues.map(({ path, message }) => ({
        field: ['plan', ...path.map(String)].join('.'),
        message,
      })),
    );
  }
  refuseUnreadablePattern(checked.data.timeFormat);
  if (checked.data.mode === 'replace-period') {
    const message = 'Files that replace a period are not taken yet; leave the mode at merge.';
    throw new ApiError('not-built', message, { errors: [{ field: 'plan.mode', message }] });
  }
  return checked.data;
}

function refuseUnreadablePattern(timeFormat: string): void {
  if (timeFormat === 'auto') return;
  try {
    compileTimePattern(timeFormat);
  } catch (error) {
    if (!(error instanceof IntakeFailure)) throw error;
    throw refuse([{ field: 'plan.timeFormat', message: error.advice }]);
  }
}

const refuse = (issues: Problem['errors']): ApiError =>
  new ApiError('invalid-input', wrongPlan, { errors: issues });
