import { z } from 'zod';
import { contract, idParam, instantSchema, nameSchema } from './contract.ts';
import { columnPlanSchema } from './plan.ts';
import { siteParams } from './sites.ts';

/** A saved reading of one kind of export, shared in its site. */
export const savedPlanSchema = z.object({
  id: z.int(),
  name: z.string(),
  plan: columnPlanSchema,
  savedBy: z.string().nullable(),
  savedAt: instantSchema,
});
export type SavedPlan = z.infer<typeof savedPlanSchema>;

const header = z.array(z.string().max(4000)).min(1).max(1000);
const planParams = siteParams.extend({ planId: idParam });

export const listColumnPlans = contract({
  name: 'listColumnPlans',
  method: 'get',
  path: '/api/sites/:siteId/column-plans',
  summary: 'The saved column plans of a site, by name',
  action: 'column-plan.read',
  params: siteParams,
  response: z.array(savedPlanSchema),
});

export const saveColumnPlan = contract({
  name: 'saveColumnPlan',
  method: 'post',
  path: '/api/sites/:siteId/column-plans',
  summary: 'Saves a column plan by name; the next file with the same header is read by it',
  action: 'column-plan.save',
  params: siteParams,
  body: z.object({
    name: nameSchema,
    plan: columnPlanSchema,
    header: header.describe(
      'the header of the file for which it was made, by which it is recognised',
    ),
  }),
  response: savedPlanSchema,
  status: 201,
});

export const changeColumnPlan = contract({
  name: 'changeColumnPlan',
  method: 'patch',
  path: '/api/sites/:siteId/column-plans/:planId',
  summary: 'Renames a saved plan or changes how it reads; uploads keep the plan that read them',
  action: 'column-plan.save',
  params: planParams,
  body: z.object({
    name: nameSchema.optional(),
    plan: columnPlanSchema.optional(),
    header: header.optional(),
  }),
  response: savedPlanSchema,
});

export const retireColumnPlan = contract({
  name: 'retireColumnPlan',
  method: 'delete',
  path: '/api/sites/:siteId/column-plans/:planId',
  summary: 'Takes a saved plan out of use; uploads keep the plan that read them',
  action: 'column-plan.save',
  params: planParams,
  response: z.object({}),
  responseKind: 'empty',
  status: 204,
});
