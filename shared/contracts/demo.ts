import { z } from 'zod';
import { contract, instantSchema } from './contract.ts';
import { siteParams } from './sites.ts';

/** Something that was planted in the demo's data, for a good reader to find. */
export const plantedSchema = z.object({
  kind: z.enum(['rising', 'held', 'overrun', 'lost-finishes']),
  zones: z.array(z.object({ id: z.int(), name: z.string() })),
  /** The period in which it is seen best. */
  from: instantSchema,
  to: instantSchema,
  /** Since when, where it began. */
  since: instantSchema.nullable(),
  /** The level that is held, or the cap that is overrun. */
  limit: z.number().nullable(),
});
export type Planted = z.infer<typeof plantedSchema>;

export const readPlanted = contract({
  name: 'readPlanted',
  method: 'get',
  path: '/api/sites/:siteId/planted',
  summary: 'What was planted in the data of the demo; null at any other site',
  action: 'site.read',
  params: siteParams,
  response: z.object({ planted: z.array(plantedSchema).nullable() }),
});
