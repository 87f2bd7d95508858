import { QueryClient } from '@tanstack/react-query';
import { ApiProblem } from '@/client/data/api-problem';

/** Lists change while one looks; a kept capture's samples never do. */
export const staleMs = { list: 10_000, thing: 30_000, never: Infinity } as const;

const mostRetries = 2;

export function createQueryClient(): QueryClient {
  return new QueryClient({
    defaultOptions: {
      queries: {
        staleTime: staleMs.list,
        retry: (failures, error) => failures < mostRetries && error instanceof ApiProblem && error.temporary,
        // The hub may be reachable where the browser thinks it is offline (a bench without internet).
        networkMode: 'always',
      },
      mutations: { retry: false, networkMode: 'always' },
    },
  });
}
