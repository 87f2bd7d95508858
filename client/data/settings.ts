import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { settings, settingsList, type SettingsInput } from '@/server/contract';
import { pathOf } from '@/client/data/api';
import { useApi } from '@/client/data/app-data-context';

export const settingsKeys = { ofRig: (rigId: string) => ['settings', rigId] as const };

/** Settings versions of a rig, the one in force first. Empty: the defaults are in force. */
export function useSettings(rigId: string) {
  const api = useApi();
  return useQuery({
    queryKey: settingsKeys.ofRig(rigId),
    queryFn: ({ signal }) => api.get(pathOf('rigs', rigId, 'settings'), settingsList, { signal }),
  });
}

/** Makes a new version, in force from the next block on. */
export function useSaveSettings(rigId: string) {
  const api = useApi();
  const queries = useQueryClient();
  return useMutation({
    mutationFn: (input: SettingsInput) => api.post(pathOf('rigs', rigId, 'settings'), input, settings),
    onSuccess: () => queries.invalidateQueries({ queryKey: settingsKeys.ofRig(rigId) }),
  });
}
