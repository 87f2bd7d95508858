import { useQuery } from '@tanstack/react-query';
import { hubInfo } from '@/server/contract';
import { useApi } from '@/client/data/app-data-context';

/** How the hub can be reached; it changes with the network only. */
export function useHubInfo() {
  const api = useApi();
  return useQuery({
    queryKey: ['hub'],
    queryFn: ({ signal }) => api.get('/hub', hubInfo, { signal }),
    staleTime: 5 * 60_000,
  });
}
