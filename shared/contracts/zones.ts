import { z } from 'zod';
import { contract, idParam, instantOrNull, instantSchema, nameSchema } from './contract.ts';
import { siteParams } from './sites.ts';

export const zoneParams = siteParams.extend({ zoneId: idParam });
export const unitSchema = z.enum(['jobs', 'units']);
export const hoursSchema = z.enum(['clock', 'working']);
export const countsFromSchema = z.enum(['arrival', 'start']);

export const zoneSchema = z.object({
  id: z.int(),
  kind: z.enum(['area', 'loop', 'site']),
  name: z.string(),
  areaIds: z.array(z.int()),
  /** Place in the flow; areas that work side by side share one. Null for loops and the site. */
  position: z.int().nullable(),
  cap: z.object({ limit: z.number(), unit: unitSchema, from: instantSchema }).nullable(),
  servers: z.int().nullable(),
  countsFrom: countsFromSchema,
  state: z.enum(['ready', 'deriving']),
  dataFrom: instantOrNull,
  dataUntil: instantOrNull,
  /** Until then the zone fills up from an empty log, and levels are too low. */
  warmUntil: instantOrNull,
});
export type Zone = z.infer<typeof zoneSchema>;

export const listZones = contract({
  name: 'listZones',
  method: 'get',
  path: '/api/sites/:siteId/zones',
  summary: 'The zones of a site: areas in order of flow, loops, the site itself',
  action: 'zone.read',
  params: siteParams,
  response: z.array(zoneSchema),
});

export const readZone = contract({
  name: 'readZone',
  method: 'get',
  path: '/api/sites/:siteId/zones/:zoneId',
  summary: 'One zone',
  action: 'zone.read',
  params: zoneParams,
  response: zoneSchema,
});

export const createZone = contract({
  name: 'createZone',
  method: 'post',
  path: '/api/sites/:siteId/zones',
  summary: 'Makes an area, or a loop of areas',
  action: 'zone.create',
  params: siteParams,
  body: z.discriminatedUnion('kind', [
    z.object({
      kind: z.literal('area'),
      name: nameSchema,
      countsFrom: countsFromSchema.optional(),
    }),
    z.object({
      kind: z.literal('loop'),
      name: nameSchema,
      areaIds: z.array(idParam).min(1).max(200),
      countsFrom: countsFromSchema.optional(),
    }),
  ]),
  response: zoneSchema,
  status: 201,
});

export const changeZone = contract({
  name: 'changeZone',
  method: 'patch',
  path: '/api/sites/:siteId/zones/:zoneId',
  summary: 'Changes a zone; its state is `deriving` until figures agree',
  action: 'zone.change',
  params: zoneParams,
  body: z
    .object({
      name: nameSchema,
      countsFrom: countsFromSchema,
      servers: z.int().min(1).max(100_000).nullable(),
      /** From when the number of servers holds; from the beginning when left out. */
      serversFrom: instantSchema,
      position: z.int().min(1).max(1000),
      areaIds: z.array(idParam).min(1).max(200),
    })
    .partial(),
  response: zoneSchema,
});
