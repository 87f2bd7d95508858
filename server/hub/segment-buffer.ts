/**
 * Where a stream's samples wait for their commit: one run of contiguous samples of one type per channel. Copying a
 * block in here is the only copy that the hub makes before the spool's own; the signal path reads these views.
 */
import type { SegmentWrite } from '@/db/spool-types';
import type { SampleArray } from '@/signal/model';
import type { Block } from '@/ingest/block';

/** Aim of one row of the spool, bytes of all channels. */
const segmentBytes = 64 * 1024;

type Kind = new (length: number) => SampleArray;

export class SegmentBuffer {
  readonly #arrays: SampleArray[];
  readonly #kinds: Kind[];
  readonly capacity: number;
  startIndex = 0;
  count = 0;
  firstSeq = 0;
  lastSeq = 0;
  timeS: number | null = null;
  receivedAtMs = 0;

  constructor(kinds: readonly Kind[], minSamples: number) {
    this.#kinds = [...kinds];
    const bytesPerSample = kinds.reduce(
      (sum, K) => sum + (K as unknown as { BYTES_PER_ELEMENT: number }).BYTES_PER_ELEMENT,
      0,
    );
    this.capacity = Math.max(minSamples, Math.ceil(segmentBytes / bytesPerSample));
    this.#arrays = kinds.map((K) => new K(this.capacity));
  }

  static kindsOf(block: Block): Kind[] {
    return block.channels.map((c) => c.samples.constructor as Kind);
  }

  /** Whether the block would continue this run: same types, next index, room left. */
  takes(block: Block, startIndex: number): boolean {
    if (this.count + block.length > this.capacity) return false;
    if (this.count > 0 && this.startIndex + this.count !== startIndex) return false;
    for (let i = 0; i < this.#kinds.length; i += 1) {
      if (block.channels[i]?.samples.constructor !== this.#kinds[i]) return false;
    }
    return true;
  }

  /** Copies the block in and returns views on the copy, valid until the next `reset`. */
  append(block: Block, startIndex: number, receivedAtMs: number): SampleArray[] {
    if (this.count === 0) {
      this.startIndex = startIndex;
      this.firstSeq = block.seq;
      this.timeS = block.timeS ?? null;
    }
    const views: SampleArray[] = [];
    for (let i = 0; i < this.#arrays.length; i += 1) {
      const array = this.#arrays[i] as SampleArray;
      array.set(block.channels[i]?.samples as never, this.count);
      views.push(array.subarray(this.count, this.count + block.length));
    }
    this.count += block.length;
    this.lastSeq = block.seq;
    this.receivedAtMs = receivedAtMs;
    return views;
  }

  reset(): void {
    this.count = 0;
  }

  toWrite(streamId: number, channels: readonly string[]): SegmentWrite {
    return {
      streamId,
      startIndex: this.startIndex,
      count: this.count,
      firstSeq: this.firstSeq,
      lastSeq: this.lastSeq,
      timeS: this.timeS,
      receivedAtMs: this.receivedAtMs,
      channels: channels.map((name, i) => ({
        name,
        samples: (this.#arrays[i] as SampleArray).subarray(0, this.count),
      })),
    };
  }
}
