import type { Rig, RibbonWish } from '@/server/contract';
import { secondsSince } from '@/client/data/live-types';
import { useLiveRig, type LiveRigView } from '@/client/data/use-live';
import { useNow } from '@/client/data/use-now';
import { shortSpan } from '@/client/screens/shared/when';
import { watchNow, type WatchNow } from '@/client/screens/watch/watch-model';

export type RigNow = WatchNow & { view: LiveRigView; lastBlock: string };

const lookEveryMs = 500;

/** A rig as the list shows it. */
export function useRigNow(rig: Rig, ribbon: RibbonWish | null): RigNow {
  const view = useLiveRig(rig.id, { ribbon, detail: false });
  const nowMs = useNow(lookEveryMs);
  const at = view.frame?.live.lastBlockAt ?? null;
  const agoS = secondsSince(at, view, nowMs);
  const lastBlock =
    agoS === null ? 'no block yet' : agoS < 2 ? 'block just now' : `last block ${shortSpan(agoS)} ago`;
  return { ...watchNow(rig, view, nowMs), view, lastBlock };
}
