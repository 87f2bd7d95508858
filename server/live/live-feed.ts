/** What the live sockets need of the hub; they never reach into it otherwise. */
import type { Live, LiveFrame, Ribbon, RibbonWish } from '@/server/contract';

export interface LiveFeed {
  /** null: no such rig. */
  live(rigId: string): Live | null;
  ribbon(rigId: string, wish: RibbonWish): Ribbon | null;
  wheelFace(rigId: string): NonNullable<LiveFrame['wheelFace']> | null;
  speedHistory(rigId: string): NonNullable<LiveFrame['speedHistory']>;
  /** Calls `news` when samples, settings or the state of a rig came. Returns what ends it. */
  watch(rigId: string, news: () => void): () => void;
}

/** Who speaks on a live socket. */
export type ViewerIdentity = { personId: string; familyId: string; role: string; expiresAtMs: number };

/** null: not a good token, or not a role that may look. */
export type VerifyViewer = (accessToken: string) => Promise<ViewerIdentity | null> | ViewerIdentity | null;
