import { keepPreviousData, queryOptions } from '@tanstack/react-query';
import { readFloor } from '../../../shared/contracts/figures.ts';
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
