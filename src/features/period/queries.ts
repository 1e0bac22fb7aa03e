import { keepPreviousData, queryOptions } from '@tanstack/react-query';
import { readSpan } from '../../../shared/contracts/figures.ts';
import { call } from '../../api/call.ts';

/** What the loaded span of a site looks like. */
export const spanQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['site', siteId, 'span'],
    queryFn: ({ signal }) => call(readSpan, { params: { siteId }, signal }),
    placeholderData: keepPreviousData,
  });
