import { queryOptions } from '@tanstack/react-query';
import { readPlanted } from '../../../shared/contracts/demo.ts';
import { call } from '../../api/call.ts';

/** What was planted in the demo's data; null at any other site. */
export const plantedQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['site', siteId, 'planted'],
    queryFn: ({ signal }) => call(readPlanted, { params: { siteId }, signal }),
  });
