import { useQuery } from '@tanstack/react-query';
import { samples, type Samples } from '@/server/contract';
import { pathOf } from '@/client/data/api';
import { useApi } from '@/client/data/app-data-context';
import { staleMs } from '@/client/data/query-client';

export type SamplesWish = {
  channel: string;
  fromS: number;
  toS: number;
  /** Columns at most; the samples themselves where there are fewer. */
  points: number;
  signal: 'raw' | 'filtered';
};

export const sampleKeys = {
  ofCapture: (captureId: string) => ['samples', captureId] as const,
  stretch: (captureId: string, wish: SamplesWish) => ['samples', captureId, wish] as const,
};

/**
 * A stretch of one channel of a capture. While the next stretch is on its way the one before stays: `isPlaceholderData`
 * says so, and its own `fromS` and `stepS` say where it stands.
 */
export function useSamples(captureId: string, wish: SamplesWish) {
  const api = useApi();
  return useQuery<Samples, Error, Samples, ReturnType<typeof sampleKeys.stretch>>({
    queryKey: sampleKeys.stretch(captureId, wish),
    queryFn: ({ signal }) =>
      api.get(pathOf('captures', captureId, 'samples'), samples, { query: { ...wish }, signal }),
    staleTime: staleMs.never,
    placeholderData: (before, query) => {
      const [, id, then] = query?.queryKey ?? [];
      const same = id === captureId && then?.channel === wish.channel && then.signal === wish.signal;
      return same ? before : undefined;
    },
  });
}
