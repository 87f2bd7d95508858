import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { rig, rigList, type Rig, type RigInput } from '@/server/contract';
import { pathOf, type Api } from '@/client/data/api';
import { useApi } from '@/client/data/app-data-context';
import { staleMs } from '@/client/data/query-client';

export const rigKeys = {
  root: ['rigs'] as const,
  list: () => ['rigs', 'list'] as const,
  one: (rigId: string) => ['rigs', 'one', rigId] as const,
};

/** All rigs, newest first. */
export function useRigs() {
  const api = useApi();
  return useQuery({ queryKey: rigKeys.list(), queryFn: ({ signal }) => allRigs(api, signal) });
}

export function useRig(rigId: string) {
  const api = useApi();
  return useQuery({
    queryKey: rigKeys.one(rigId),
    queryFn: ({ signal }) => api.get(pathOf('rigs', rigId), rig, { signal }),
    staleTime: staleMs.thing,
  });
}

export function useCreateRig() {
  const api = useApi();
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (input: RigInput) => api.post('/rigs', input, rig),
    onSuccess: (made) => {
      queries.setQueryData(rigKeys.one(made.id), made);
      return queries.invalidateQueries({ queryKey: rigKeys.list() });
    },
  });
}

export function useSaveRig(rigId: string) {
  const api = useApi();
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (input: RigInput) => api.patch(pathOf('rigs', rigId), input, rig),
    onSuccess: (saved) => {
      queries.setQueryData(rigKeys.one(rigId), saved);
      return queries.invalidateQueries({ queryKey: rigKeys.list() });
    },
  });
}

/** A lab has tens of rigs: all pages are fetched, so that the list can be searched and counted. */
async function allRigs(api: Api, signal: AbortSignal): Promise<Rig[]> {
  const rigs: Rig[] = [];
  let cursor: string | null = null;
  do {
    const query: Record<string, string | number | undefined> = { limit: 100, cursor: cursor ?? undefined };
    const page: { items: Rig[]; nextCursor: string | null } = await api.get('/rigs', rigList, {
      query,
      signal,
    });
    rigs.push(...page.items);
    cursor = page.nextCursor;
  } while (cursor !== null);
  return rigs;
}
