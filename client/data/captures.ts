import {
  keepPreviousData,
  useInfiniteQuery,
  useMutation,
  useQuery,
  useQueryClient,
} from '@tanstack/react-query';
import { capture, captureList, type CaptureInput, type CapturePatch } from '@/server/contract';
import type { FindingCode } from '@/signal/model';
import { pathOf } from '@/client/data/api';
import { useApi } from '@/client/data/app-data-context';
import { staleMs } from '@/client/data/query-client';

export type CaptureFilter = { rigId?: string; tag?: string; finding?: FindingCode; text?: string };

const pageSize = 30;

export const captureKeys = {
  root: ['captures'] as const,
  lists: () => ['captures', 'list'] as const,
  list: (filter: CaptureFilter) => ['captures', 'list', filter] as const,
  one: (captureId: string) => ['captures', 'one', captureId] as const,
};

/** The Shelf, newest first, page by page. */
export function useCaptures(filter: CaptureFilter) {
  const api = useApi();
  return useInfiniteQuery({
    queryKey: captureKeys.list(filter),
    initialPageParam: undefined as string | undefined,
    queryFn: ({ pageParam, signal }) => {
      const { rigId, tag, finding, text } = filter;
      const query = { rig: rigId, tag, finding, q: text, cursor: pageParam, limit: pageSize };
      return api.get('/captures', captureList, { query, signal });
    },
    getNextPageParam: (page) => page.nextCursor ?? undefined,
    placeholderData: keepPreviousData,
  });
}

export function useCapture(captureId: string) {
  const api = useApi();
  return useQuery({
    queryKey: captureKeys.one(captureId),
    queryFn: ({ signal }) => api.get(pathOf('captures', captureId), capture, { signal }),
    staleTime: staleMs.thing,
  });
}

/** Keeps the last seconds, or a stretch of a stream. Fails with `nothing-to-keep` where there is nothing. */
export function useKeep(rigId: string) {
  const api = useApi();
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (input: CaptureInput) => api.post(pathOf('rigs', rigId, 'captures'), input, capture),
    onSuccess: (kept) => {
      queries.setQueryData(captureKeys.one(kept.id), kept);
      return queries.invalidateQueries({ queryKey: captureKeys.lists() });
    },
  });
}

/** Changes title, tags or note. */
export function useEditCapture() {
  const api = useApi();
  const queries = useQueryClient();
  return useMutation({
    mutationFn: ({ captureId, patch }: { captureId: string; patch: CapturePatch }) =>
      api.patch(pathOf('captures', captureId), patch, capture),
    onSuccess: (saved) => {
      queries.setQueryData(captureKeys.one(saved.id), saved);
      return queries.invalidateQueries({ queryKey: captureKeys.lists() });
    },
  });
}

/** Takes a capture off the Shelf for good: also the undo of Keep. */
export function useDeleteCapture() {
  const api = useApi();
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (captureId: string) => api.delete(pathOf('captures', captureId)),
    onSuccess: (_, captureId) => {
      queries.removeQueries({ queryKey: captureKeys.one(captureId) });
      return queries.invalidateQueries({ queryKey: captureKeys.lists() });
    },
  });
}
