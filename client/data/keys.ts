import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { rigKeyCreated, rigKeyList } from '@/server/contract';
import { pathOf } from '@/client/data/api';
import { useApi } from '@/client/data/app-data-context';

export const keyKeys = { ofRig: (rigId: string) => ['rig-keys', rigId] as const };

/** The rig's keys. `lastUsedAt` is no live value: ask often while someone waits for the first block. */
export function useKeys(rigId: string, everyMs: number | null) {
  const api = useApi();
  return useQuery({
    queryKey: keyKeys.ofRig(rigId),
    queryFn: ({ signal }) =>
      api.get(pathOf('rigs', rigId, 'keys'), rigKeyList, { query: { limit: 100 }, signal }),
    refetchInterval: everyMs ?? false,
  });
}

/** The answer holds the key itself, this once. It stays out of the query cache. */
export function useMakeKey(rigId: string) {
  const api = useApi();
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (name: string) => api.post(pathOf('rigs', rigId, 'keys'), { name }, rigKeyCreated),
    gcTime: 0,
    onSuccess: () => queries.invalidateQueries({ queryKey: keyKeys.ofRig(rigId) }),
  });
}

export function useRevokeKey(rigId: string) {
  const api = useApi();
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (keyId: string) => api.delete(pathOf('rigs', rigId, 'keys', keyId)),
    onSettled: () => queries.invalidateQueries({ queryKey: keyKeys.ofRig(rigId) }),
  });
}
