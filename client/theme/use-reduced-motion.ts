import { useSyncExternalStore } from 'react';

const query = '(prefers-reduced-motion: reduce)';

function subscribe(tell: () => void): () => void {
  const media = globalThis.matchMedia?.(query);
  media?.addEventListener('change', tell);
  return () => media?.removeEventListener('change', tell);
}

const read = () => globalThis.matchMedia?.(query).matches ?? false;

/** True where the reader asked for no motion: nothing moves by itself then. */
export function useReducedMotion(): boolean {
  return useSyncExternalStore(subscribe, read, () => false);
}
