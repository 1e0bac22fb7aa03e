import { keepPreviousData, queryOptions } from '@tanstack/react-query';
import { readTrust } from '../../../shared/contracts/trust.ts';
import { call } from '../../api/call.ts';

/** How well the data carry each area on each day of a period. */
export const trustQuery = (siteId: number, asked: { from: string; to: string }) =>
  queryOptions({
    queryKey: ['site', siteId, 'trust', asked],
    queryFn: ({ signal }) => call(readTrust, { params: { siteId }, query: asked, signal }),
    placeholderData: keepPreviousData,
  });
