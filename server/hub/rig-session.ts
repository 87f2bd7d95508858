/** One rig as it runs: its streams on their way in, and the newest of them as it is seen live. */
import type { Spool } from '@/db/spool-types';
import type { Block, IngestIssue } from '@/ingest/block';
import type { OutcomeCallback } from '@/ingest/block-sink';
import type { SampleArray } from '@/signal/model';
import { BoardRestarts } from '@/server/hub/board-restarts';
import type { HubRig } from '@/server/hub/hub-types';
import { LiveSignal } from '@/server/hub/live-signal';
import { RateMeter } from '@/server/hub/rate-meter';
import type { StreamEvents } from '@/server/hub/stream-intake';
import { StreamIntake } from '@/server/hub/stream-intake';

/** A stream that had no block for so long is let go of; the spool remembers where it stood. */
const forgetStreamAfterMs = 60_000;
/** Streams that are held at once; a board has one, a few after reboots. */
const maxStreams = 32;
/** Of blocks that wait for their turn, all streams of the rig together. */
const maxEarlyBytes = 64 * 1024 * 1024;
/** Names for which sequence numbers were set aside before a block came. */
const maxReserved = 256;

export type SessionDeps = {
  spool: Spool;
  nowMs: () => number;
  /** Never set back, for comparing clocks. */
  steadyMs: () => number;
  dirty(intake: StreamIntake): void;
  onSignalFailure(rigId: string, error: unknown): void;
};

export class RigSession implements StreamEvents {
  readonly #streams = new Map<string, StreamIntake>();
  readonly #ackWatchers = new Set<(stream: string) => void>();
  readonly #newsWatchers = new Set<() => void>();
  readonly arriving = new RateMeter();
  readonly #reserved = new Map<string, number>();
  readonly #restarts = new BoardRestarts();
  #channelNames: ReadonlySet<string>;
  #newest: StreamIntake | null = null;
  #signal: { intake: StreamIntake; live: LiveSignal } | null = null;
  #newsDue = false;

  constructor(
    private rig: HubRig,
    private readonly deps: SessionDeps,
  ) {
    this.#channelNames = new Set(rig.setup.channels.map((channel) => channel.name));
    const stored = deps.spool.newestStream(rig.id);
    if (stored !== null) this.#newest = this.#restore(stored.name);
  }

  get setup(): HubRig['setup'] {
    return this.rig.setup;
  }

  get filter(): HubRig['settings']['filter'] {
    return this.rig.settings.filter;
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
    this.#channelNames = new Set(rig.setup.channels.map((channel) => channel.name));
    this.#signal?.live.configure(rig);
    this.#news();
  }

  offer(block: Block, token: number, done: OutcomeCallback): void {
    const nowMs = this.deps.nowMs();
    const known = this.stream(block.stream);
    const stranger = this.#strangerIn(block);
    // What is held already is answered as such, whatever has become of the rig.
    if (stranger !== undefined && !(block.seq <= (known?.ackedSeq ?? -1))) {
      known?.refuse(block.seq);
      return done({ result: 'refused', issue: stranger }, block.stream, block.seq, token);
    }
    if (known === undefined && block.rateHz === undefined)
      return done({ result: 'refused', issue: rateMissing }, block.stream, block.seq, token);
    if (this.#earlyBytes() > maxEarlyBytes && known?.awaits(block.seq) !== true) {
      const detail = 'Too many blocks of this rig wait for ones before them.';
      return done({ result: 'unavailable', detail }, block.stream, block.seq, token);
    }
    const intake = known ?? this.#open(block, block.rateHz ?? 0, nowMs);
    intake.offer(block, token, done, nowMs);
  }

  /** Sets aside sequence numbers, also of a stream that has no block yet; the first of them. */
  reserveSeqs(name: string, count: number): number {
    const known = this.stream(name);
    if (known !== undefined) return known.reserveSeqs(count);
    const first = this.#reserved.get(name) ?? 0;
    if (this.#reserved.size >= maxReserved) this.#reserved.delete(this.#reserved.keys().next().value ?? '');
    this.#reserved.set(name, first + count);
    return first;
  }

  /** The rig is deleted: who waits is told, and nothing more of it is committed. */
  end(detail: string): StreamIntake[] {
    const ended = [...this.#streams.values()];
    for (const intake of ended) {
      intake.failed(detail);
      intake.endOrder();
    }
    this.#streams.clear();
    return ended;
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

  #earlyBytes(): number {
    let bytes = 0;
    for (const intake of this.#streams.values()) bytes += intake.earlyBytes;
    return bytes;
  }

  /** Puts a stream among those held, and lets go of the one that was quiet longest where they are too many. */
  #hold(name: string, intake: StreamIntake): void {
    this.#streams.set(name, intake);
    if (this.#streams.size <= maxStreams) return;
    let quietest: StreamIntake | undefined;
    for (const other of this.#streams.values()) {
      if (other === intake || other === this.#newest || other.hasPending) continue;
      if (quietest === undefined || other.lastBlockAtMs < quietest.lastBlockAtMs) quietest = other;
    }
    if (quietest !== undefined) this.#streams.delete(quietest.name);
  }

  #strangerIn(block: Block): IngestIssue | undefined {
    const unknown = block.channels.find((c) => !this.#channelNames.has(c.name));
    if (unknown === undefined) return undefined;
    const names = [...this.#channelNames].join(', ');
    return {
      slug: 'invalid',
      status: 422,
      detail: `This rig has no channel "${unknown.name}"; its channels are ${names}.`,
      pointer: `/samples/${unknown.name.replaceAll('~', '~0').replaceAll('/', '~1')}`,
      at: undefined,
    };
  }

  watchAcks(moved: (stream: string) => void): () => void {
    this.#ackWatchers.add(moved);
    return () => this.#ackWatchers.delete(moved);
  }

  watchNews(news: () => void): () => void {
    this.#newsWatchers.add(news);
    return () => this.#newsWatchers.delete(news);
  }

  #open(block: Block, rateHz: number, nowMs: number): StreamIntake {
    const names = [...this.#channelNames];
    block.channels.sort((a, b) => names.indexOf(a.name) - names.indexOf(b.name));
    const channels = block.channels.map((c) => c.name);
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
    const reserved = this.#reserved.get(block.stream);
    if (reserved !== undefined) intake.reserveSeqs(reserved);
    this.#reserved.delete(block.stream);
    this.#hold(block.stream, intake);
    return intake;
  }

  #restore(name: string): StreamIntake | null {
    const stored = this.deps.spool.findStream(this.rig.id, name);
    // One that was opened and then lost all it had with the process begins anew with its next block.
    if (stored === null || stored.state === '') return null;
    const intake = StreamIntake.restore(stored, this.deps.spool, this, this.deps.nowMs());
    this.#hold(name, intake);
    if (intake.hasPending) this.deps.dirty(intake);
    return intake;
  }

  samples(intake: StreamIntake, startIndex: number, arrays: readonly SampleArray[], count: number): void {
    const nowMs = this.deps.nowMs();
    this.arriving.add(nowMs, count);
    this.#newest = intake;
    try {
      const live = this.#liveOf(intake, startIndex, nowMs);
      live.append(startIndex, arrays, count);
      const streamS = (startIndex + count) / intake.rateHz;
      live.note({ kind: 'arrival', streamS, hubS: this.deps.steadyMs() / 1000 });
    } catch (error) {
      // A fault in the signal path must cost neither the samples nor the other rigs.
      this.live?.fail();
      this.deps.onSignalFailure(this.rig.id, error);
    }
    this.#news();
  }

  gap(intake: StreamIntake, lostSamples: number, estimated: boolean): void {
    if (this.#signal?.intake !== intake) return;
    try {
      this.#signal.live.skip(lostSamples, estimated);
    } catch (error) {
      this.#signal.live.fail();
      this.deps.onSignalFailure(this.rig.id, error);
    }
  }

  dirty(intake: StreamIntake): void {
    this.deps.dirty(intake);
  }

  spoiled(intake: StreamIntake): void {
    this.#streams.delete(intake.name);
  }

  acked(intake: StreamIntake): void {
    for (const moved of this.#ackWatchers) moved(intake.name);
  }

  #liveOf(intake: StreamIntake, startIndex: number, nowMs: number): LiveSignal {
    const before = this.#signal?.intake;
    if (this.#signal && before === intake) return this.#signal.live;
    const live = new LiveSignal(this.rig, intake.rateHz, intake.channels, startIndex);
    this.#signal = { intake, live };
    const restarts = before ? this.#restarts.note(before, intake.name, nowMs) : null;
    if (before && restarts !== null)
      live.note({ kind: 'restart', awayS: Math.max(0, nowMs - before.lastBlockAtMs) / 1000, restarts });
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

const rateMissing: IngestIssue = {
  slug: 'invalid',
  status: 422,
  detail: 'The first block of a stream must carry its `rate`.',
  pointer: '/rate',
  at: undefined,
};
