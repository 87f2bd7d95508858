import type { LiveFrame } from '@/server/contract';

export type SpeedHistory = NonNullable<LiveFrame['speedHistory']>;

/**
 * The link to the hub.
 * `idle`: nobody looks. `waiting`: lost, trying again by itself. `failed`: trying again needs `retry()`.
 */
export type Connection =
  | { status: 'idle' }
  | { status: 'connecting' }
  | { status: 'live' }
  | { status: 'waiting'; retryAtMs: number; losses: number; retry: () => void }
  | { status: 'failed'; why: 'not-signed-in' | 'forbidden'; retry: () => void };

/** What is known of one rig. */
export type LiveRig = {
  frame: LiveFrame | null;
  speedHistory: SpeedHistory | null;
  /** When `frame` came, by this device's clock, ms. */
  receivedAtMs: number | null;
  /** Frames have stopped coming: what `frame` says is no longer now. */
  stale: boolean;
  /** The rig was deleted. */
  gone: boolean;
};

export type LiveSnapshot = { connection: Connection; rigs: ReadonlyMap<string, LiveRig> };

export const noLiveRig: LiveRig = {
  frame: null,
  speedHistory: null,
  receivedAtMs: null,
  stale: false,
  gone: false,
};

/**
 * Seconds since an instant of the hub's clock, as counted from the frame that told of it: the two clocks need not
 * agree. null where either is unknown.
 */
export function secondsSince(instant: string | null, rig: LiveRig, nowMs: number): number | null {
  if (instant === null || rig.frame === null || rig.receivedAtMs === null) return null;
  const atHubMs = Date.parse(rig.frame.at) - Date.parse(instant);
  return Math.max(0, (atHubMs + nowMs - rig.receivedAtMs) / 1000);
}
