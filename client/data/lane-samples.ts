import { useQueries } from '@tanstack/react-query';
import { samples, type Samples } from '@/server/contract';
import { pathOf } from '@/client/data/api';
import { useApi } from '@/client/data/app-data-context';
import { staleMs } from '@/client/data/query-client';
import { sampleKeys, type SamplesWish } from '@/client/data/samples';

export type LaneSamples = { samples: Samples | undefined; loading: boolean; error: Error | null };

/**
 * The same stretch of several channels of a capture, in their order. While the next stretch is on its way the one
 * before stays; its own `fromS` and `stepS` say where it stands.
 */
export function useLaneSamples(
  captureId: string,
  channels: readonly string[],
  stretch: Omit<SamplesWish, 'channel'>,
): LaneSamples[] {
  const api = useApi();
  return useQueries({
    queries: channels.map((channel) => {
      const wish = { ...stretch, channel };
      return {
        queryKey: sampleKeys.stretch(captureId, wish),
        queryFn: ({ signal }: { signal: AbortSignal }) =>
          api.get(pathOf('captures', captureId, 'samples'), samples, { query: { ...wish }, signal }),
        staleTime: staleMs.never,
        placeholderData: (before: Samples | undefined) => (before?.channel === channel ? before : undefined),
      };
    }),
    combine: (results) => results.map((r) => ({ samples: r.data, loading: r.isFetching, error: r.error })),
  });
}
