import { useRouter } from 'expo-router';
import type { Href } from 'expo-router';

/** Goes to a path of the app. */
export function useGo(): (path: string) => void {
  const router = useRouter();
  return (path) => router.navigate(path as Href);
}

/** Paths of a rig's pages. */
export const rigPath = {
  watch: (rigId: string) => `/rigs/${encodeURIComponent(rigId)}`,
  setup: (rigId: string) => `/rigs/${encodeURIComponent(rigId)}/setup`,
  connect: (rigId: string) => `/rigs/${encodeURIComponent(rigId)}/connect`,
};

export const capturePath = (captureId: string) => `/shelf/${encodeURIComponent(captureId)}`;
