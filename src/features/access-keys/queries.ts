import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import {
  createAccessKey,
  listAccessKeys,
  revokeAccessKey,
} from '../../../shared/contracts/access-keys.ts';
import { call } from '../../api/call.ts';

export const accessKeysQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['site', siteId, 'access-keys'],
    queryFn: ({ signal }) => call(listAccessKeys, { params: { siteId }, signal }),
  });

export function useCreateAccessKey(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: { name: string; expiresAt: string | null }) =>
      call(createAccessKey, { params: { siteId }, body }),
    onSuccess: () => client.invalidateQueries(accessKeysQuery(siteId)),
  });
}

export function useRevokeAccessKey(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (keyId: number) => call(revokeAccessKey, { params: { siteId, keyId } }),
    onSuccess: () => client.invalidateQueries(accessKeysQuery(siteId)),
  });
}
