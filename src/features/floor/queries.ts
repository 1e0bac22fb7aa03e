import { keepPreviousData, queryOptions } from '@tanstack/react-query';
import { readFloor, readFloorLevels } from '../../../shared/contracts/figures.ts';
import { call } from '../../api/call.ts';

/** Every zone of a site over a period. */
export const floorQuery = (
  siteId: number,
  asked: { from: string; to: string; unit: 'jobs' | 'units' },
) =>
  queryOptions({
    queryKey: ['site', siteId, 'floor', asked],
    queryFn: ({ signal }) => call(readFloor, { params: { siteId }, query: asked, signal }),
    placeholderData: keepPreviousData,
  });

/** Levels by step of every zone, for the small pictures. */
export const floorLevelsQuery = (
  siteId: number,
  asked: { from: string; to: string; unit: 'jobs' | 'units' },
) =>
  queryOptions({
    queryKey: ['site', siteId, 'floor', 'levels', asked],
    queryFn: ({ signal }) => call(readFloorLevels, { params: { siteId }, query: asked, signal }),
    placeholderData: keepPreviousData,
  });
