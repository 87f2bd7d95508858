/** One rig as it runs: its streams on their way in, and the newest of them as it is seen live. */
import type { Spool } from '@/db/spool-types';
import type { Block, IngestIssue } from '@/ingest/block';
import type { OutcomeCallback } from '@/ingest/block-sink';
import type { SampleArray } from '@/signal/model';
import type { HubRig } from '@/server/hub/hub-types';
import { LiveSignal } from '@/server/hub/live-signal';
import { RateMeter } from '@/server/hub/rate-meter';
import type { StreamEvents } from '@/server/hub/stream-intake';
import { StreamIntake } from '@/server/hub/stream-intake';

/** A stream that had no block for so long is let go of; the spool remembers where it stood. */
const forgetStreamAfterMs = 60_000;

export type SessionDeps = {
  spool: Spool;
  nowMs: () => number;
  dirty(intake: StreamIntake): void;
  onSignalFailure(rigId: string, error: unknown): void;
};

export class RigSession implements StreamEvents {
  readonly #streams = new Map<string, StreamIntake>();
  readonly #ackWatchers = new Set<(stream: string) => void>();
  readonly #newsWatchers = new Set<() => void>();
  readonly arriving = new RateMeter();
  #newest: StreamIntake | null = null;
  #signal: { intake: StreamIntake; live: LiveSignal } | null = null;
  #newsDue = false;

  constructor(
    private rig: HubRig,
    private readonly deps: SessionDeps,
  ) {
    const stored = deps.spool.newestStream(rig.id);
    if (stored !== null && stored.state !== '') this.#newest = this.#restore(stored.name);
  }

  get setup(): HubRig['setup'] {
    return this.rig.setup;
  }

  get settingsVersion(): number {
    return this.rig.settingsVersion;
  }

  get newest(): StreamIntake | null {
    return this.#newest;
  }

  get live(): LiveSignal | null {
    return this.#signal?.live ?? null;
  }

  /** New settings or a changed rig: in force from the next block on. */
  configure(rig: HubRig): void {
    this.rig = rig;
    this.#signal?.live.configure(rig);
    this.#news();
  }

  offer(block: Block, token: number, done: OutcomeCallback): void {
    const nowMs = this.deps.nowMs();
    const intake = this.#streams.get(block.stream) ?? this.#open(block, nowMs);
    if (intake instanceof StreamIntake) {
      intake.offer(block, token, done, nowMs);
      return;
    }
    done({ result: 'refused', issue: intake }, block.stream, block.seq, token);
  }

  /** The intake of a stream that is known, else undefined. */
  stream(name: string): StreamIntake | undefined {
    const known = this.#streams.get(name);
    if (known !== undefined) return known;
    return this.#restore(name) ?? undefined;
  }

  advance(nowMs: number): void {
    for (const [name, intake] of this.#streams) {
      intake.advance(nowMs);
      const idle = nowMs - intake.lastBlockAtMs > forgetStreamAfterMs;
      if (idle && intake !== this.#newest && !intake.hasPending) this.#streams.delete(name);
    }
  }

  watchAcks(moved: (stream: string) => void): () => void {
    this.#ackWatchers.add(moved);
    return () => this.#ackWatchers.delete(moved);
  }

  watchNews(news: () => void): () => void {
    this.#newsWatchers.add(news);
    return () => this.#newsWatchers.delete(news);
  }

  #open(block: Block, nowMs: number): StreamIntake | IngestIssue {
    const restored = this.#restore(block.stream);
    if (restored !== null) return restored;
    const names = this.rig.setup.channels.map((c) => c.name);
    const unknown = block.channels.find((c) => !names.includes(c.name));
    if (unknown !== undefined) {
      return {
        slug: 'invalid',
        status: 422,
        detail: `This rig has no channel "${unknown.name}"; its channels are ${names.join(', ')}.`,
        pointer: `/samples/${unknown.name.replaceAll('~', '~0').replaceAll('/', '~1')}`,
        at: undefined,
      };
    }
    if (block.rateHz === undefined) {
      return {
        slug: 'invalid',
        status: 422,
        detail: 'The first block of a stream must carry its `rate`.',
        pointer: '/rate',
        at: undefined,
      };
    }
    block.channels.sort((a, b) => names.indexOf(a.name) - names.indexOf(b.name));
    const channels = block.channels.map((c) => c.name);
    const { rateHz } = block;
    const streamId = this.deps.spool.openStream({
      rigId: this.rig.id,
      name: block.stream,
      rateHz,
      channels,
      nowMs,
    });
    const intake = new StreamIntake(
      streamId,
      this.rig.id,
      block.stream,
      { rateHz, channels, lastBlockAtMs: nowMs },
      this,
    );
    this.#streams.set(block.stream, intake);
    return intake;
  }

  #restore(name: string): StreamIntake | null {
    const stored = this.deps.spool.findStream(this.rig.id, name);
    if (stored === null) return null;
    const intake = StreamIntake.restore(stored, this.deps.spool, this, this.deps.nowMs());
    this.#streams.set(name, intake);
    if (intake.hasPending) this.deps.dirty(intake);
    return intake;
  }

  samples(intake: StreamIntake, startIndex: number, arrays: readonly SampleArray[], count: number): void {
    const nowMs = this.deps.nowMs();
    this.arriving.add(nowMs, count);
    this.#newest = intake;
    const live = this.#liveOf(intake, startIndex);
    try {
      live.append(startIndex, arrays, count);
    } catch (error) {
      // A fault in the signal path must cost neither the samples nor the other rigs.
      live.fail();
      this.deps.onSignalFailure(this.rig.id, error);
    }
    this.#news();
  }

  gap(intake: StreamIntake, lostSamples: number, estimated: boolean): void {
    if (this.#signal?.intake === intake) this.#signal.live.skip(lostSamples, estimated);
  }

  dirty(intake: StreamIntake): void {
    this.deps.dirty(intake);
  }

  acked(intake: StreamIntake): void {
    for (const moved of this.#ackWatchers) moved(intake.name);
  }

  #liveOf(intake: StreamIntake, startIndex: number): LiveSignal {
    if (this.#signal?.intake === intake) return this.#signal.live;
    const live = new LiveSignal(this.rig, intake.rateHz, intake.channels, startIndex);
    this.#signal = { intake, live };
    return live;
  }

  /** Many blocks of one turn of the event loop make one piece of news. */
  #news(): void {
    if (this.#newsDue || this.#newsWatchers.size === 0) return;
    this.#newsDue = true;
    setImmediate(() => {
      this.#newsDue = false;
      for (const news of this.#newsWatchers) news();
    });
  }
}
