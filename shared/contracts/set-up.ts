import { z } from 'zod';
import { contract, idParam } from './contract.ts';
import { siteParams } from './sites.ts';

const positionSchema = z.int().min(1, 'Use a place from 1 on.').max(1000, 'Use at most 1000.');
const serversSchema = z
  .int('Use a whole number of servers.')
  .min(1, 'Use at least 1, or leave it out.')
  .max(10_000, 'Use at most 10000.')
  .nullable();

/** The order of areas and their servers, as declared or found, beside what the data let guess. */
export const setUpSchema = z.object({
  /** Whether a person has said that this is the order; else the areas are as they were found in files. */
  confirmed: z.boolean(),
  areas: z.array(
    z.object({
      zoneId: z.int(),
      name: z.string(),
      position: z.int(),
      guessedPosition: z.int(),
      servers: z.int().nullable(),
      /** Inferred from the jobs in process at once; null where the log holds no starts. */
      guessedServers: z.int().nullable(),
    }),
  ),
});
export type SetUp = z.infer<typeof setUpSchema>;

export const readSetUp = contract({
  name: 'readSetUp',
  method: 'get',
  path: '/api/sites/:siteId/set-up',
  summary: 'The order of areas and their servers, with what the data let guess',
  action: 'zone.read',
  params: siteParams,
  response: setUpSchema,
});

export const confirmSetUp = contract({
  name: 'confirmSetUp',
  method: 'post',
  path: '/api/sites/:siteId/set-up',
  summary: 'Confirms the order of all areas, and their servers from the beginning of the data on',
  action: 'zone.change',
  params: siteParams,
  body: z.object({
    areas: z
      .array(z.object({ zoneId: idParam, position: positionSchema, servers: serversSchema }))
      .max(2000),
  }),
  response: setUpSchema,
});
