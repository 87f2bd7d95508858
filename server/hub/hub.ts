/**
 * The hub: where blocks come in (`BlockSink`), where viewers look (`LiveFeed`), and where Keep finds what is stored.
 * Ingest and viewers know these interfaces only.
 */
import type { Spool } from '@/db/spool-types';
import type { Block } from '@/ingest/block';
import type { BlockSink, OutcomeCallback, StreamInfo } from '@/ingest/block-sink';
import type { Live, LiveFrame, Ribbon, RibbonWish } from '@/server/contract';
import { Committer } from '@/server/hub/committer';
import type { Hub, HubRig, KeepPlan } from '@/server/hub/hub-types';
import { planKeep } from '@/server/hub/keep-plan';
import { liveOf, ribbonOf } from '@/server/hub/live-view';
import { RigSession } from '@/server/hub/rig-session';
import type { LiveFeed } from '@/server/live/live-feed';

const commitEveryMs = 40;
const retryCommitMs = 1_000;
const advanceEveryMs = 200;
const purgeEveryMs = 1_000;
const purgeRows = 64;
/** Between two purges while more is due: many rigs write far more rows a second than one purge drops. */
const purgeAgainMs = 20;

export type HubOptions = {
  spool: Spool;
  rigs: readonly HubRig[];
  lookbackS: number;
  nowMs: () => number;
  /** A clock that is never set back; the process's own where left out. */
  steadyMs?: () => number;
  log: { warn(fields: object, message: string): void; error(fields: object, message: string): void };
};

export type RunningHub = Hub &
  BlockSink &
  LiveFeed & {
    /** Calls `close` when the key is revoked; returns what ends the watching. */
    watchKey(keyId: string, close: () => void): () => void;
    /** Commits what waits and stops. */
    close(): void;
  };

export function createHub(options: HubOptions): RunningHub {
  const { spool, nowMs, log } = options;
  const sessions = new Map<string, RigSession>();
  const rigs = new Map(options.rigs.map((rig) => [rig.id, rig]));
  const held = new Set<KeepPlan>();
  const keyWatchers = new Map<string, Set<() => void>>();
  /** For each rig: where what is held of its newest stream begins. */
  const oldest = new Map<string, { streamId: number; index: number | null; readMs: number }>();

  const committer = new Committer({
    spool,
    intervalMs: commitEveryMs,
    retryMs: retryCommitMs,
    onFailure: (error) =>
      log.error({ err: error }, 'the spool cannot store; what has arrived is held and tried again'),
  });

  function session(rigId: string): RigSession | null {
    const known = sessions.get(rigId);
    if (known !== undefined) return known;
    const rig = rigs.get(rigId);
    if (rig === undefined) return null;
    const made = new RigSession(rig, {
      spool,
      nowMs,
      steadyMs: options.steadyMs ?? (() => performance.now()),
      dirty: (intake) => committer.markDirty(intake),
      onSignalFailure: (id, error) => log.error({ err: error, rigId: id }, 'the signal path failed'),
    });
    sessions.set(rigId, made);
    return made;
  }

  function lookbackOf(rigId: string, rig: RigSession): number {
    const { newest } = rig;
    if (newest === null) return 0;
    const { streamId } = newest;
    let known = oldest.get(rigId);
    if (known?.streamId !== streamId || nowMs() - known.readMs > 2_000) {
      known = { streamId, index: spool.oldestIndex(streamId), readMs: nowMs() };
      oldest.set(rigId, known);
    }
    if (known.index === null) return 0;
    const heldS = (newest.nextIndex - known.index) / newest.rateHz;
    return Math.max(0, Math.min(options.lookbackS, heldS));
  }

  const advancing = setInterval(() => {
    for (const rig of sessions.values()) rig.advance(nowMs());
  }, advanceEveryMs);
  let purging = setTimeout(purge, purgeEveryMs);
  function purge(): void {
    let dropped = 0;
    try {
      const stretches = [...held].map(({ streamId, fromIndex, toIndex }) => ({
        streamId,
        fromIndex,
        toIndex,
      }));
      dropped = spool.purge(nowMs() - options.lookbackS * 1000, purgeRows, stretches);
    } catch (error) {
      log.warn({ err: error }, 'old blocks could not be dropped');
    }
    purging = setTimeout(purge, dropped < purgeRows ? purgeEveryMs : purgeAgainMs);
  }

  return {
    offer(rigId: string, block: Block, token: number, done: OutcomeCallback): void {
      const { failing } = committer;
      if (failing !== null)
        return done({ result: 'unavailable', detail: failing }, block.stream, block.seq, token);
      const rig = session(rigId);
      if (rig === null) {
        return done({ result: 'unavailable', detail: 'This rig is gone.' }, block.stream, block.seq, token);
      }
      try {
        rig.offer(block, token, done);
      } catch (error) {
        log.error({ err: error, rigId }, 'a block could not be taken');
        done({ result: 'unavailable', detail: 'The hub cannot store now.' }, block.stream, block.seq, token);
      }
    },
    refuse(rigId, stream, seq) {
      session(rigId)?.stream(stream)?.refuse(seq);
    },
    ackPosition: (rigId, stream) => session(rigId)?.stream(stream)?.ackedSeq,
    watchAcks: (rigId, moved) => session(rigId)?.watchAcks(moved) ?? (() => undefined),
    streamInfo(rigId, stream): StreamInfo | undefined {
      const intake = session(rigId)?.stream(stream);
      return intake === undefined ? undefined : { rateHz: intake.rateHz };
    },
    reserveSeqs: (rigId, stream, count) => session(rigId)?.reserveSeqs(stream, count) ?? 0,

    live(rigId): Live | null {
      const rig = session(rigId);
      if (rig === null) return null;
      return liveOf(
        {
          signal: rig.live,
          stream: rig.newest?.name ?? null,
          lastBlockAtMs: rig.newest?.lastBlockAtMs ?? null,
          arrivingHz: rig.arriving.read(nowMs()),
          lookbackS: lookbackOf(rigId, rig),
          streamS: rig.newest === null ? null : rig.newest.nextIndex / rig.newest.rateHz,
          rateHz: rig.newest?.rateHz ?? null,
          settingsVersion: rig.settingsVersion,
        },
        nowMs(),
      );
    },
    ribbon(rigId: string, wish: RibbonWish): Ribbon | null {
      const rig = session(rigId);
      return rig === null || rig.live === null ? null : ribbonOf(rig.live, rig.setup, rig.filter, wish);
    },
    wheelFace: (rigId): NonNullable<LiveFrame['wheelFace']> | null =>
      session(rigId)?.live?.status()?.wheelFace ?? null,
    speedHistory(rigId) {
      const live = session(rigId)?.live;
      return live === undefined || live === null
        ? { agoS: [], rpm: [] }
        : live.history.read(live.nextIndex / live.rateHz);
    },
    watch: (rigId, news) => session(rigId)?.watchNews(news) ?? (() => undefined),

    async planKeep(rigId, what) {
      const intake = 'lastSeconds' in what ? session(rigId)?.newest : null;
      const newest = intake ? { stream: intake.name, endIndex: await intake.whenOrdered() } : undefined;
      committer.flush();
      return planKeep(spool, rigId, what, newest);
    },
    hold(plan) {
      held.add(plan);
      return () => held.delete(plan);
    },
    rigSaved(rig) {
      rigs.set(rig.id, rig);
      sessions.get(rig.id)?.configure(rig);
    },
    rigDeleted(rigId) {
      rigs.delete(rigId);
      for (const intake of sessions.get(rigId)?.end('This rig is gone.') ?? []) committer.forget(intake);
      sessions.delete(rigId);
      oldest.delete(rigId);
      spool.deleteRig(rigId);
    },
    keyRevoked(keyId) {
      for (const close of [...(keyWatchers.get(keyId) ?? [])]) close();
    },
    watchKey(keyId, close) {
      const watchers = keyWatchers.get(keyId) ?? new Set();
      keyWatchers.set(keyId, watchers);
      watchers.add(close);
      return () => {
        watchers.delete(close);
        if (watchers.size === 0) keyWatchers.delete(keyId);
      };
    },
    close() {
      clearInterval(advancing);
      clearTimeout(purging);
      try {
        committer.flush();
      } finally {
        committer.close();
      }
    },
  };
}
