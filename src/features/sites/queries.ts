import { queryOptions, useMutation, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { createSite, listSites, readSite } from '../../../shared/contracts/sites.ts';
import { call } from '../../api/call.ts';

const watchEveryMs = 1000;

export const sitesQuery = queryOptions({
  queryKey: ['sites'],
  queryFn: ({ signal }) => call(listSites, { signal }),
});

/** One site; looked at again every second while its figures catch up. */
export const siteQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['site', siteId],
    queryFn: ({ signal }) => call(readSite, { params: { siteId }, signal }),
    refetchInterval: (query) => (query.state.data?.busy ? watchEveryMs : false),
  });

export const useSite = (siteId: number) => useSuspenseQuery(siteQuery(siteId)).data;

export function useCreateSite() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: { name: string; timeZone: string; organisationId?: number }) =>
      call(createSite, { body }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['sites'] }),
  });
}
