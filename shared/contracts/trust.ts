import { z } from 'zod';
import { trustGrades, trustNoticeKinds } from '../trust.ts';
import { contract, instantOrNull, instantSchema } from './contract.ts';
import { siteParams } from './sites.ts';

const gradeSchema = z.enum(trustGrades);

/** One area on one local day of the site. */
export const trustCellSchema = z.object({
  zoneId: z.int(),
  day: z.iso.date(),
  grade: gradeSchema,
  /** Why it is not covered: worst first, each with the grade that it alone would give. */
  reasons: z.array(z.object({ grade: gradeSchema, text: z.string() })),
});
export type TrustCell = z.infer<typeof trustCellSchema>;

/** Something about the data of the whole site that a person should know, and what to do about it. */
export const trustNoticeSchema = z.object({
  kind: z.enum(trustNoticeKinds),
  zoneIds: z.array(z.int()),
  text: z.string(),
  advice: z.string(),
  /** How far an area's data lie behind, or by how much two clocks differ; null where it has no length. */
  seconds: z.number().nullable(),
});
export type TrustNotice = z.infer<typeof trustNoticeSchema>;

export const trustMapSchema = z.object({
  /** The local days that are graded: those of the period within the loaded span; null where there is none. */
  from: instantOrNull,
  to: instantOrNull,
  /** Every area that uploads tell of, in order of flow. */
  areas: z.array(z.object({ id: z.int(), name: z.string() })),
  cells: z.array(trustCellSchema),
  /** About everything that is loaded, whatever the period. */
  notices: z.array(trustNoticeSchema),
});
export type TrustMap = z.infer<typeof trustMapSchema>;

export const readTrust = contract({
  name: 'readTrust',
  method: 'get',
  path: '/api/sites/:siteId/trust',
  summary: 'How well the data carry each area on each local day, and what is wrong with them',
  action: 'figures.read',
  params: siteParams,
  query: z
    .object({ from: instantSchema, to: instantSchema })
    .refine((period) => Date.parse(period.from) < Date.parse(period.to), {
      error: '`from` must lie before `to`.',
      path: ['from'],
    }),
  response: trustMapSchema,
});
