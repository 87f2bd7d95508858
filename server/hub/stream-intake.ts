/** One stream of a rig on its way in: order, the samples that wait for their commit, and who waits to be answered. */
import type { Spool, SpoolStream } from '@/db/spool-types';
import type { Assembler, AssemblerState, Gap } from '@/ingest/assembler';
import { createAssembler } from '@/ingest/assembler';
import type { Block, IngestIssue } from '@/ingest/block';
import type { BlockOutcome, OutcomeCallback } from '@/ingest/block-sink';
import { acceptedOutcome, duplicateOutcome } from '@/ingest/block-sink';
import type { SampleArray } from '@/signal/model';
import type { CommitBatch, CommitSource } from '@/server/hub/committer';
import { SegmentBuffer } from '@/server/hub/segment-buffer';

export type StreamEvents = {
  /** Samples in order; the arrays are valid during the call only. */
  samples(intake: StreamIntake, startIndex: number, arrays: readonly SampleArray[], count: number): void;
  gap(intake: StreamIntake, lostSamples: number, estimated: boolean): void;
  dirty(intake: StreamIntake): void;
  acked(intake: StreamIntake): void;
  /** What it holds can never be stored: it must be let go of, and taken up again from the spool. */
  spoiled?(intake: StreamIntake): void;
};

type Waiting = { done: OutcomeCallback; outcome: BlockOutcome; seq: number; token: number };

function copied(block: Block): Block {
  return { ...block, channels: block.channels.map((c) => ({ name: c.name, samples: c.samples.slice() })) };
}

function bytesOf(block: Block): number {
  return block.channels.reduce((sum, { samples }) => sum + samples.byteLength, 0);
}

export class StreamIntake implements CommitSource {
  readonly channels: string[];
  readonly rateHz: number;
  ackedSeq: number | undefined;
  lastBlockAtMs: number;
  /** Sequence numbers below this one are taken or set aside. */
  #reservedSeq = 0;
  readonly #assembler: Assembler<Block>;
  #buffer: SegmentBuffer | undefined;
  #sealed: SegmentBuffer[] = [];
  #spare: SegmentBuffer[] = [];
  #gaps: Gap[] = [];
  readonly #earlyPending = new Map<number, Block>();
  readonly #earlyStored = new Set<number>();
  #released: number[] = [];
  /** Held by the assembler until their turn. */
  #earlyBytes = 0;
  #waiting: Waiting[] = [];
  #orderWatchers: { seq: number; known(endIndex: number): void }[] = [];
  #collected = {
    waiting: 0,
    sealed: 0,
    gaps: 0,
    released: 0,
    early: [] as number[],
    ack: undefined as number | undefined,
  };
  #changed = false;

  constructor(
    readonly streamId: number,
    readonly rigId: string,
    readonly name: string,
    stream: { rateHz: number; channels: string[]; lastBlockAtMs: number },
    private readonly events: StreamEvents,
    restored?: AssemblerState,
  ) {
    this.rateHz = stream.rateHz;
    this.channels = stream.channels;
    this.lastBlockAtMs = stream.lastBlockAtMs;
    this.#assembler = createAssembler<Block>({
      events: {
        block: (block, startIndex) => this.#pass(block, startIndex),
        gap: (gap) => this.#lose(gap),
      },
      keep: (block) => this.#keepEarly(block),
      ...(restored === undefined ? {} : { restored }),
    });
    this.ackedSeq = this.#assembler.ackSeq();
  }

  /** Takes a stream up again after a restart, with the blocks that were stored before their turn. */
  static restore(stream: SpoolStream, spool: Spool, events: StreamEvents, nowMs: number): StreamIntake {
    const state = stream.state === '' ? undefined : (JSON.parse(stream.state) as AssemblerState);
    const at = { rateHz: stream.rateHz, channels: stream.channels, lastBlockAtMs: stream.lastBlockAtMs ?? 0 };
    const intake = new StreamIntake(stream.streamId, stream.rigId, stream.name, at, events, state);
    for (const early of spool.readEarly(stream.streamId)) {
      intake.#earlyStored.add(early.seq);
      const block = {
        stream: stream.name,
        seq: early.seq,
        rateHz: undefined,
        timeS: early.timeS ?? undefined,
        length: early.count,
        channels: early.channels,
      };
      if (intake.#assembler.offer(block, nowMs / 1000).result !== 'accepted') intake.#release(early.seq);
    }
    intake.ackedSeq = intake.#assembler.ackSeq();
    return intake;
  }

  get nextIndex(): number {
    return this.#assembler.snapshot()?.nextIndex ?? 0;
  }

  offer(block: Block, token: number, done: OutcomeCallback, nowMs: number): void {
    const verdict = this.#assembler.offer(block, nowMs / 1000);
    if (verdict.result === 'refused') {
      this.refuse(block.seq);
      return done(
        { result: 'refused', issue: verdict.issue satisfies IngestIssue },
        this.name,
        block.seq,
        token,
      );
    }
    if (verdict.result === 'accepted') {
      this.lastBlockAtMs = nowMs;
      this.#changed = true;
    } else if (!this.hasPending) return done(duplicateOutcome, this.name, block.seq, token);
    const outcome = verdict.result === 'accepted' ? acceptedOutcome : duplicateOutcome;
    this.#waiting.push({ done, outcome, seq: block.seq, token });
    this.events.dirty(this);
  }

  /** This block will not come. The ack position may move with it, which the next commit makes known. */
  refuse(seq: number): void {
    this.#assembler.refuse(seq);
    if (this.#assembler.ackSeq() === this.ackedSeq) return;
    this.#changed = true;
    this.events.dirty(this);
  }

  /** Lets time pass for what is missing. */
  advance(nowMs: number): void {
    const due = this.#assembler.deadlineS();
    if (due === undefined || nowMs / 1000 < due) return;
    this.#assembler.advance(nowMs / 1000);
    this.#changed = true;
    this.events.dirty(this);
  }

  reserveSeqs(count: number): number {
    const first = Math.max(this.#assembler.freshSeq(), this.#reservedSeq);
    this.#reservedSeq = first + count;
    return first;
  }

  /** Whether this block would let blocks that wait go on: it must be let in however many wait. */
  awaits(seq: number): boolean {
    return this.#earlyBytes > 0 && seq === (this.#assembler.snapshot()?.nextSeq ?? -1);
  }

  /** Of blocks that wait for ones before them. */
  get earlyBytes(): number {
    return this.#earlyBytes;
  }

  get hasPending(): boolean {
    return this.#changed || this.#waiting.length > 0 || this.#assembler.deadlineS() !== undefined;
  }

  #keepEarly(block: Block): Block {
    const held = this.#earlyStored.has(block.seq) ? block : copied(block);
    this.#earlyBytes += bytesOf(held);
    if (!this.#earlyStored.has(block.seq)) this.#earlyPending.set(block.seq, held);
    return held;
  }

  #release(seq: number): void {
    this.#earlyPending.delete(seq);
    if (this.#earlyStored.delete(seq)) this.#released.push(seq);
  }

  /**
   * The index just after everything that is held now, once its place is known: a block that came before its turn has
   * none until the missing one comes or is declared lost.
   */
  whenOrdered(): Promise<number> {
    if (this.#assembler.deadlineS() === undefined) return Promise.resolve(this.nextIndex);
    const seq = this.#assembler.freshSeq() - 1;
    return new Promise((known) => this.#orderWatchers.push({ seq, known }));
  }

  #pass(block: Block, startIndex: number): void {
    if (this.#earlyStored.has(block.seq) || this.#earlyPending.has(block.seq)) {
      this.#earlyBytes -= bytesOf(block);
      this.#release(block.seq);
    }
    if (this.#buffer !== undefined && !this.#buffer.takes(block, startIndex)) this.#seal();
    this.#buffer ??= this.#freshBuffer(block);
    const arrays = this.#buffer.append(block, startIndex, this.lastBlockAtMs);
    this.events.samples(this, startIndex, arrays, block.length);
    if (this.#orderWatchers.length > 0) this.#tellOrder(block.seq, startIndex + block.length);
  }

  /** Nothing more will come into order. */
  endOrder(): void {
    this.#tellOrder(Infinity, this.nextIndex);
  }

  #tellOrder(seq: number, endIndex: number): void {
    const due = this.#orderWatchers.filter((watcher) => watcher.seq <= seq);
    this.#orderWatchers = this.#orderWatchers.filter((watcher) => watcher.seq > seq);
    for (const { known } of due) known(endIndex);
  }

  #freshBuffer(block: Block): SegmentBuffer {
    for (let i = this.#spare.length - 1; i >= 0; i -= 1) {
      const spare = this.#spare[i] as SegmentBuffer;
      if (spare.takes(block, 0)) {
        this.#spare.splice(i, 1);
        return spare;
      }
    }
    return new SegmentBuffer(SegmentBuffer.kindsOf(block), block.length);
  }

  #seal(): void {
    if (this.#buffer !== undefined && this.#buffer.count > 0) this.#sealed.push(this.#buffer);
    this.#buffer = undefined;
  }

  #lose(gap: Gap): void {
    this.#seal();
    this.#gaps.push(gap);
    this.events.gap(this, gap.lostSamples, gap.estimated);
  }

  collect(batch: CommitBatch): void {
    this.#seal();
    const { streamId } = this;
    for (const segment of this.#sealed) batch.segments.push(segment.toWrite(streamId, this.channels));
    for (const { fromIndex, lostSamples, estimated } of this.#gaps) {
      batch.gaps.push({ streamId, fromIndex, lostSamples, estimated });
    }
    for (const seq of this.#released) batch.releasedEarly.push({ streamId, seq });
    for (const block of this.#earlyPending.values()) {
      batch.early.push({
        streamId,
        seq: block.seq,
        timeS: block.timeS ?? null,
        receivedAtMs: this.lastBlockAtMs,
        channels: block.channels,
      });
    }
    const state = this.#assembler.snapshot();
    if (state !== undefined) {
      batch.streams.push({
        streamId,
        nextSeq: state.nextSeq,
        nextIndex: state.nextIndex,
        state: JSON.stringify(state),
        lastBlockAtMs: this.lastBlockAtMs,
      });
    }
    this.#collected = {
      waiting: this.#waiting.length,
      sealed: this.#sealed.length,
      gaps: this.#gaps.length,
      released: this.#released.length,
      early: [...this.#earlyPending.keys()],
      ack: this.#assembler.ackSeq(),
    };
    this.#changed = false;
  }

  committed(): void {
    const { waiting, sealed, gaps, released, early, ack } = this.#collected;
    for (const segment of this.#sealed.splice(0, sealed)) {
      segment.reset();
      if (this.#spare.length < 2) this.#spare.push(segment);
    }
    this.#gaps.splice(0, gaps);
    this.#released.splice(0, released);
    for (const seq of early) if (this.#earlyPending.delete(seq)) this.#earlyStored.add(seq);
    const moved = ack !== this.ackedSeq;
    this.ackedSeq = ack;
    for (const w of this.#waiting.splice(0, waiting)) w.done(w.outcome, this.name, w.seq, w.token);
    if (moved) this.events.acked(this);
  }

  /** What was collected stays and is collected again; those who wait are told to try again. */
  failed(detail: string, never = false): void {
    this.#changed = true;
    if (never) this.events.spoiled?.(this);
    const told = this.#waiting.splice(0);
    for (const w of told) w.done({ result: 'unavailable', detail }, this.name, w.seq, w.token);
  }
}
