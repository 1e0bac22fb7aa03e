import { z } from 'zod';
import { contract, idParam, instantOrNull, instantSchema } from './contract.ts';
import { siteParams } from './sites.ts';

export const areaMoveSchema = z.object({
  id: z.int(),
  areaId: z.int(),
  areaName: z.string(),
  targetAreaId: z.int(),
  targetAreaName: z.string(),
  /** From this moment on; null where all rows are moved, so that the area is merged into the other. */
  from: instantOrNull,
  /** Rows told so far that the move takes from the area. */
  rows: z.int(),
  movedBy: z.string().nullable(),
  movedAt: instantSchema,
});
export type AreaMove = z.infer<typeof areaMoveSchema>;

export const areaSchema = z.object({
  id: z.int(),
  name: z.string(),
  /** Place in the flow; areas that work side by side share one. */
  position: z.int(),
  servers: z.int().nullable(),
  /** From when the latest number of servers holds; null where it holds from the beginning, or there is none. */
  serversFrom: instantOrNull,
  /** Every way in which files write it, as it was first written so. */
  spellings: z.array(z.string()),
  /** Rows told of it, under any of its spellings. */
  toldRows: z.int(),
  /** Rows that count for it, and their first and latest time: those told of it, less and plus moved ones. */
  rows: z.int(),
  firstAt: instantOrNull,
  latestAt: instantOrNull,
  /** The area that all its rows count for; it is then left out of zones and figures. */
  mergedInto: z.int().nullable(),
});
export type Area = z.infer<typeof areaSchema>;

/** Two areas that may be one, written in two ways: the one with fewer rows first. */
export const likelyPairSchema = z.object({ areaId: z.int(), targetAreaId: z.int() });
export type LikelyPair = z.infer<typeof likelyPairSchema>;

export const areasSchema = z.object({
  areas: z.array(areaSchema),
  moves: z.array(areaMoveSchema),
  likelyPairs: z.array(likelyPairSchema),
});
export type Areas = z.infer<typeof areasSchema>;

export const readAreas = contract({
  name: 'readAreas',
  method: 'get',
  path: '/api/sites/:siteId/areas',
  summary: 'The areas of a site in order of flow, how files write them, and the moves in force',
  action: 'area.read',
  params: siteParams,
  response: areasSchema,
});

export const moveArea = contract({
  name: 'moveArea',
  method: 'post',
  path: '/api/sites/:siteId/area-moves',
  summary: 'Lets rows told of an area count for another: all of them, or from a moment on',
  action: 'area.move',
  params: siteParams,
  body: z.object({
    areaId: idParam,
    targetAreaId: idParam,
    /** Rows of records that start (arrive, else finish, where there is no start) then or later. */
    from: instantOrNull,
  }),
  response: areaMoveSchema,
  status: 201,
});

export const undoAreaMove = contract({
  name: 'undoAreaMove',
  method: 'delete',
  path: '/api/sites/:siteId/area-moves/:moveId',
  summary: 'Takes a move back: the rows count for their own area again',
  action: 'area.move',
  params: siteParams.extend({ moveId: idParam }),
  response: z.object({}),
  responseKind: 'empty',
  status: 204,
});
