import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import { confirmSetUp, readSetUp } from '../../../shared/contracts/set-up.ts';
import { call } from '../../api/call.ts';

/** The order of areas and their servers, with what the data let guess. */
export const setUpQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['site', siteId, 'set-up'],
    queryFn: ({ signal }) => call(readSetUp, { params: { siteId }, signal }),
  });

export function useConfirmSetUp(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (areas: { zoneId: number; position: number; servers: number | null }[]) =>
      call(confirmSetUp, { params: { siteId }, body: { areas } }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['site', siteId] }),
  });
}
