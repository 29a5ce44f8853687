import { QueryCache, QueryClient } from '@tanstack/vue-query';
import { ApiProblem } from '../api/problem.ts';

/**
 * Conventions: a key is [area, …ids as refs]; 4xx answers are final; replies stay as they came (ISO strings).
 * `onSignedOut` runs when any query learns that the session has ended.
 */
export function createQueryClient(onSignedOut: () => void): QueryClient {
  return new QueryClient({
    queryCache: new QueryCache({
      onError(error) {
        if (error instanceof ApiProblem && error.code === 'not-signed-in') onSignedOut();
      },
    }),
    defaultOptions: {
      queries: {
        staleTime: 15_000,
        retry: (failures, error) =>
          error instanceof ApiProblem && error.status > 0 && error.status < 500 ? false : failures < 2,
      },
    },
  });
}
