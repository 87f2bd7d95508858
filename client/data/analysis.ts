import { useQuery } from '@tanstack/react-query';
import { analysis } from '@/server/contract';
import { pathOf } from '@/client/data/api';
import { useApi } from '@/client/data/app-data-context';
import { staleMs } from '@/client/data/query-client';

export const analysisKeys = { ofCapture: (captureId: string) => ['analysis', captureId] as const };

/** Edges, speed, direction and findings of a capture under the settings and wheel that it was kept with. */
export function useAnalysis(captureId: string) {
  const api = useApi();
  return useQuery({
    queryKey: analysisKeys.ofCapture(captureId),
    queryFn: ({ signal }) => api.get(pathOf('captures', captureId, 'analysis'), analysis, { signal }),
    staleTime: staleMs.never,
  });
}
