import { columnPlanSchema, type ColumnPlan } from '../../shared/contracts/plan.ts';
import type { Problem } from '../../shared/errors.ts';
import type { Database } from '../db/client.ts';
import { ApiError } from '../errors.ts';
import { listSavedPlans } from './column-plans.ts';
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

/**
 * The plan that a request asks for: a whole one, the id of a saved one, or none.
 *
 * @throws ApiError where the site has no such plan
 */
export function planAskedFor(
  db: Database,
  site: { organisationId: number; siteId: number },
  plan: ColumnPlan | number | undefined,
): Promise<ColumnPlan | null> {
  if (plan === undefined) return Promise.resolve(null);
  return typeof plan === 'number'
    ? readSavedPlan(db, site, plan)
    : Promise.resolve(checkPlan(plan));
}

async function readSavedPlan(
  db: Database,
  site: { organisationId: number; siteId: number },
  id: number,
): Promise<ColumnPlan> {
  const saved = await listSavedPlans(db, site);
  const found = saved.find((plan) => plan.id === id);
  if (found) return checkPlan(found.plan);
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

/** @throws ApiError with everything that is wrong with a plan */
export function checkPlan(told: unknown): ColumnPlan {
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
