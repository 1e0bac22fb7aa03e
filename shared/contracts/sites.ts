import { z } from 'zod';
import { isTimeZone } from '../local-time.ts';
import { contract, idParam, instantOrNull, nameSchema } from './contract.ts';

export const siteParams = z.object({ siteId: idParam });

export const timeZoneSchema = z
  .string()
  .max(64)
  .refine(isTimeZone, 'This is not a known time zone; write it like Europe/Dublin.');
export const lostFinishSchema = z.enum(['infer', 'leave-open']);

export const siteSchema = z.object({
  id: z.int(),
  organisationId: z.int(),
  organisationName: z.string(),
  name: z.string(),
  timeZone: z.string(),
  currency: z.string(),
  valuePerJob: z.number().nullable(),
  lostFinish: lostFinishSchema,
  newPassAfterDays: z.int(),
  /** First moment of the site's data, and the latest for which it speaks. */
  dataFrom: instantOrNull,
  dataUntil: instantOrNull,
  /** Whether stays and levels still have to catch up with the records. */
  busy: z.boolean(),
});
export type Site = z.infer<typeof siteSchema>;

export const listSites = contract({
  name: 'listSites',
  method: 'get',
  path: '/api/sites',
  summary: 'The sites that the signed-in person may see',
  action: 'site.list',
  response: z.array(siteSchema),
});

export const createSite = contract({
  name: 'createSite',
  method: 'post',
  path: '/api/sites',
  summary: 'Makes a site',
  action: 'site.create',
  body: z.object({
    name: nameSchema,
    timeZone: timeZoneSchema,
    lostFinish: lostFinishSchema.optional(),
    organisationId: idParam.optional(),
  }),
  response: siteSchema,
  status: 201,
});

export const readSite = contract({
  name: 'readSite',
  method: 'get',
  path: '/api/sites/:siteId',
  summary: 'One site',
  action: 'site.read',
  params: siteParams,
  response: siteSchema,
});

export const changeSite = contract({
  name: 'changeSite',
  method: 'patch',
  path: '/api/sites/:siteId',
  summary: 'Changes a site; figures that depend on the change are derived again',
  action: 'site.change',
  params: siteParams,
  body: z
    .object({
      name: nameSchema,
      currency: z.string().regex(/^[A-Z]{3}$/, 'Use a three-letter currency code such as EUR.'),
      valuePerJob: z.number().min(0).max(1e12).nullable(),
      lostFinish: lostFinishSchema,
      newPassAfterDays: z.int().min(1).max(3650),
    })
    .partial(),
  response: siteSchema,
});
