import type { RibbonWish, ViewerMessage } from '@/server/contract';

/** What one part of a screen wants of a rig. */
export type Wish = {
  rigId: string;
  ribbon: RibbonWish | null;
  /** Wheel face and speed history too. */
  detail: boolean;
};

/** The hub takes no more in one message. */
export const mostRigs = 100;

type WatchMessage = Extract<ViewerMessage, { type: 'watch' }>;

/**
 * One `watch` message out of all wishes, oldest first. A rig is asked for once: with detail where anyone wants it,
 * and with the newest ribbon that anyone wants.
 */
export function mergeWishes(wishes: Iterable<Wish>): WatchMessage {
  const byRig = new Map<string, Wish>();
  for (const wish of wishes) {
    const before = byRig.get(wish.rigId);
    byRig.set(wish.rigId, {
      rigId: wish.rigId,
      ribbon: wish.ribbon ?? before?.ribbon ?? null,
      detail: wish.detail || (before?.detail ?? false),
    });
  }
  return { type: 'watch', rigs: [...byRig.values()].slice(-mostRigs) };
}
