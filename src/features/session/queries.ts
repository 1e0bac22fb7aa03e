import { queryOptions, useMutation, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import {
  createFirstAdmin,
  readSession,
  signIn,
  signOut,
  signOutEverywhere,
} from '../../../shared/contracts/auth.ts';
import { roleMay, type Action, type Role } from '../../../shared/permissions.ts';
import { call } from '../../api/call.ts';

export const sessionQuery = queryOptions({
  queryKey: ['session'],
  queryFn: ({ signal }) => call(readSession, { signal }),
  staleTime: 60_000,
});

export const useSession = () => useSuspenseQuery(sessionQuery).data;

/** The person's role in an organisation; null where they have none. */
export function useRole(organisationId: number | undefined): Role | null {
  const { session } = useSession();
  return session?.organisations.find((each) => each.id === organisationId)?.role ?? null;
}

/** Whether the signed-in person may do it there; the server has the last word. */
export function useMay(action: Action, organisationId: number | undefined): boolean {
  const role = useRole(organisationId);
  return role !== null && roleMay(role, action);
}

export function useSignIn() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: { email: string; password: string }) => call(signIn, { body }),
    onSuccess: () => client.resetQueries(),
  });
}

export function useFirstAdmin() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: {
      token: string;
      organisation: string;
      name: string;
      email: string;
      password: string;
    }) => call(createFirstAdmin, { body }),
    onSuccess: () => client.resetQueries(),
  });
}

export function useSignOut() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (everywhere: boolean) => call(everywhere ? signOutEverywhere : signOut),
    onSettled: () => client.resetQueries(),
  });
}
