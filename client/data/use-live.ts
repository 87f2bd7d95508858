import { useEffect, useRef, useSyncExternalStore } from 'react';
import { useIsFocused } from 'expo-router';
import type { RibbonWish } from '@/server/contract';
import { useAppData } from '@/client/data/app-data-context';
import { noLiveRig, type Connection, type LiveRig } from '@/client/data/live-types';

export type LiveOptions = { ribbon: RibbonWish | null; detail: boolean };
export type LiveRigView = LiveRig & { connection: Connection };

/**
 * A rig as it is now. Renders again with each of its frames, at most once an animation frame. A screen that lies
 * under another asks for nothing.
 */
export function useLiveRig(rigId: string, { ribbon, detail }: LiveOptions): LiveRigView {
  const { live } = useAppData();
  const focused = useIsFocused();
  const wishKey = JSON.stringify(ribbon);
  useEffect(() => {
    if (!focused) return undefined;
    return live.watch({ rigId, ribbon: JSON.parse(wishKey) as RibbonWish | null, detail });
  }, [live, focused, rigId, wishKey, detail]);
  const rig = useSyncExternalStore(live.subscribe, () => live.getSnapshot().rigs.get(rigId) ?? noLiveRig);
  const connection = useConnection();
  return { ...rig, connection };
}

/** Several rigs, with the same wish for each; renders again with every frame of any of them. */
export function useLiveRigs(rigIds: readonly string[], { ribbon, detail }: LiveOptions): LiveRigView[] {
  const { live } = useAppData();
  const focused = useIsFocused();
  const wishKey = JSON.stringify([rigIds, ribbon, detail]);
  useEffect(() => {
    if (!focused) return undefined;
    const [ids, wish, all] = JSON.parse(wishKey) as [string[], RibbonWish | null, boolean];
    const ends = ids.map((rigId) => live.watch({ rigId, ribbon: wish, detail: all }));
    return () => ends.forEach((end) => end());
  }, [live, focused, wishKey]);
  const last = useRef<readonly LiveRig[]>([]);
  const rigs = useSyncExternalStore(live.subscribe, () => {
    const next = rigIds.map((rigId) => live.getSnapshot().rigs.get(rigId) ?? noLiveRig);
    const same = next.length === last.current.length && next.every((rig, i) => rig === last.current[i]);
    if (!same) last.current = next;
    return last.current;
  });
  const connection = useConnection();
  return rigs.map((rig) => ({ ...rig, connection }));
}

export function useConnection(): Connection {
  const { live } = useAppData();
  return useSyncExternalStore(live.subscribe, () => live.getSnapshot().connection);
}
