/** What the rest of the server needs of the hub. Ingest and viewers meet it through these interfaces only. */
import type { Live } from '@/server/contract';
import type { RigSetup, Settings } from '@/signal/model';

/** A rig as the hub runs it: read from the database once, told of every change. */
export type HubRig = {
  id: string;
  setup: RigSetup;
  settings: Settings;
  settingsVersion: number;
};

/** A stretch of one stream that is in the spool now. Sample indices are on the stream's axis. */
export type KeepPlan = {
  rigId: string;
  streamId: number;
  stream: string;
  rateHz: number;
  channels: string[];
  fromIndex: number;
  /** Exclusive. */
  toIndex: number;
  /** Wall clock of `fromIndex`, ms. */
  startedAtMs: number;
};

export interface Hub {
  /** null: no such rig. */
  live(rigId: string): Live | null;
  /** Commits what has arrived, then says what can be kept. null: nothing to keep. */
  planKeep(
    rigId: string,
    what: { lastSeconds: number } | { stream: string; fromS: number; toS: number },
  ): Promise<KeepPlan | null>;
  /** While a plan is being copied, retention leaves its stretch alone. */
  hold(plan: KeepPlan): () => void;
  rigSaved(rig: HubRig): void;
  rigDeleted(rigId: string): void;
  /** Ends open streams of this key (4403). */
  keyRevoked(keyId: string): void;
}

/** Told by the auth side; closes live sockets at once. */
export interface LiveSessions {
  /** Sign-out everywhere, a changed role, a removed person. */
  personChanged(personId: string): void;
  /** One sign-in ended (refresh family). */
  sessionEnded(familyId: string): void;
}
