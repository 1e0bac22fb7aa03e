import { keepPreviousData, QueryClient } from '@tanstack/react-query';
import { ApiError } from './api-error.ts';

const mostTries = 2;

/** Old figures stay while new ones load; what the server refused is not asked again. */
export function createQueryClient(): QueryClient {
  return new QueryClient({
    defaultOptions: {
      queries: {
        staleTime: 15_000,
        placeholderData: keepPreviousData,
        retry: (failures, error) =>
          failures < mostTries && !(error instanceof ApiError && error.status >= 400),
      },
    },
  });
}
