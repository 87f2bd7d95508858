import type { LiveFrame } from '@/server/contract';
import type { Clock } from '@/client/data/clock';
import { noLiveRig, type LiveRig } from '@/client/data/live-types';

/** A rig of which no frame came for so long is shown as stale, ms. */
export const staleAfterMs = 2_000;

/** The newest of each watched rig. Every change makes a new `LiveRig`, so that screens can compare by identity. */
export class LiveRigs {
  readonly #clock: Clock;
  readonly #changed: () => void;
  #rigs = new Map<string, LiveRig>();
  #timer: unknown = null;

  constructor(clock: Clock, changed: () => void) {
    this.#clock = clock;
    this.#changed = changed;
  }

  snapshot(): ReadonlyMap<string, LiveRig> {
    return new Map(this.#rigs);
  }

  take(frame: LiveFrame): void {
    const before = this.#rigs.get(frame.rigId) ?? noLiveRig;
    // Left out means as before; null means none.
    const wheelFace = frame.wheelFace === undefined ? before.frame?.wheelFace : frame.wheelFace;
    this.#rigs.set(frame.rigId, {
      frame: { ...frame, wheelFace },
      speedHistory: frame.speedHistory ?? before.speedHistory,
      receivedAtMs: this.#clock.nowMs(),
      stale: false,
      gone: false,
    });
    this.#timer ??= this.#clock.setTimeout(() => this.#look(), staleAfterMs);
    this.#changed();
  }

  remove(rigId: string): void {
    this.#rigs.set(rigId, { ...noLiveRig, gone: true });
    this.#changed();
  }

  /** The link is lost: nothing that is known is now. */
  allStale(): void {
    for (const [rigId, rig] of this.#rigs) if (!rig.stale) this.#rigs.set(rigId, { ...rig, stale: true });
    this.#changed();
  }

  keepOnly(rigIds: ReadonlySet<string>): void {
    for (const rigId of this.#rigs.keys()) if (!rigIds.has(rigId)) this.#rigs.delete(rigId);
  }

  #look(): void {
    this.#timer = null;
    const nowMs = this.#clock.nowMs();
    let nextMs = Infinity;
    for (const [rigId, rig] of this.#rigs) {
      if (rig.stale || rig.receivedAtMs === null) continue;
      const leftMs = rig.receivedAtMs + staleAfterMs - nowMs;
      if (leftMs > 0) nextMs = Math.min(nextMs, leftMs);
      else {
        this.#rigs.set(rigId, { ...rig, stale: true });
        this.#changed();
      }
    }
    if (Number.isFinite(nextMs)) this.#timer = this.#clock.setTimeout(() => this.#look(), nextMs);
  }
}
