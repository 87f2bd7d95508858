/** The spool: what has arrived, in order, for as long as it can still be kept. Indices are on the stream's axis. */
import type { SampleArray } from '@/signal/model';

export type SpoolChannel = { name: string; samples: SampleArray };

/** A contiguous run of samples, all channels of one length. */
export type SegmentWrite = {
  streamId: number;
  startIndex: number;
  count: number;
  firstSeq: number;
  lastSeq: number;
  /** The board's clock at the first sample, s. */
  timeS: number | null;
  receivedAtMs: number;
  channels: readonly SpoolChannel[];
};

/** A block stored on arrival whose place in the stream is not yet known. */
export type EarlyWrite = {
  streamId: number;
  seq: number;
  timeS: number | null;
  receivedAtMs: number;
  channels: readonly SpoolChannel[];
};

/** Samples `fromIndex` to `fromIndex + lostSamples` (exclusive) never came. */
export type GapWrite = { streamId: number; fromIndex: number; lostSamples: number; estimated: boolean };

export type StreamState = {
  streamId: number;
  nextSeq: number;
  nextIndex: number;
  /** The assembler's snapshot, JSON. */
  state: string;
  lastBlockAtMs: number;
};

export type SpoolBatch = {
  segments: readonly SegmentWrite[];
  early: readonly EarlyWrite[];
  releasedEarly: readonly { streamId: number; seq: number }[];
  gaps: readonly GapWrite[];
  streams: readonly StreamState[];
};

export type SpoolStream = {
  streamId: number;
  rigId: string;
  name: string;
  rateHz: number;
  channels: string[];
  openedAtMs: number;
  /** null until the first commit of its state. */
  nextSeq: number | null;
  nextIndex: number;
  /** '' until the first commit of its state. */
  state: string;
  lastBlockAtMs: number | null;
};

export type SpoolSegment = {
  startIndex: number;
  count: number;
  receivedAtMs: number;
  channels: SpoolChannel[];
};
export type SegmentPlace = { startIndex: number; count: number; receivedAtMs: number; timeS: number | null };
export type SpoolGap = { fromIndex: number; lostSamples: number; estimated: boolean };
export type SpoolEarly = {
  seq: number;
  count: number;
  timeS: number | null;
  receivedAtMs: number;
  channels: SpoolChannel[];
};
export type Stretch = { streamId: number; fromIndex: number; toIndex: number };

/** Every write throws `StorageUnavailableError` where the disk is full or failing, and then has changed nothing. */
export interface Spool {
  /** A new stream of a rig; its id. Throws where the rig has a stream of that name of which something was committed. */
  openStream(stream: {
    rigId: string;
    name: string;
    rateHz: number;
    channels: readonly string[];
    nowMs: number;
  }): number;
  findStream(rigId: string, name: string): SpoolStream | null;
  streamById(streamId: number): SpoolStream | null;
  /** The stream that had the newest block; null where no stream of the rig ever had one. */
  newestStream(rigId: string): SpoolStream | null;
  /** Newest block first, streams without a block last; at most `limit` (1000). */
  streamsOf(rigId: string, limit?: number): SpoolStream[];
  /** Streams of all rigs that had a block at or after this instant: what a starting hub takes up again. */
  recentStreams(sinceMs: number): SpoolStream[];
  /** Writes everything in one transaction; arrays may be reused by the caller once it returns. */
  commit(batch: SpoolBatch): void;
  /**
   * What is held of samples `fromIndex` to `toIndex` (exclusive), in order, cut to the range. Reads one segment a step
   * and holds nothing open between two steps, so that commits go on meanwhile.
   */
  readSegments(streamId: number, fromIndex: number, toIndex: number): IterableIterator<SpoolSegment>;
  /** Gaps that touch the range, whole (not cut), in order. */
  readGaps(streamId: number, fromIndex: number, toIndex: number): SpoolGap[];
  /** In order of `seq`. */
  readEarly(streamId: number): SpoolEarly[];
  /** The segment that holds a sample, without its samples; null inside a gap or outside what is held. */
  segmentAt(streamId: number, index: number): SegmentPlace | null;
  /** Index of the oldest sample held; null: none. */
  oldestIndex(streamId: number): number | null;
  /**
   * Drops at most `maxRows` segments and early blocks that came before `olderThanMs` or belong to deleted rigs, the
   * oldest first, except what touches a held stretch. Rows of streams stay (the next `seq` is remembered for ever).
   * Gives back how many rows went; fewer than `maxRows` means that it is done.
   */
  purge(olderThanMs: number, maxRows: number, held: readonly Stretch[]): number;
  /** The rig's streams are gone at once, their samples with the next purges. */
  deleteRig(rigId: string): void;
  /** Size of the file and how much of it is free for reuse, bytes. */
  size(): { fileBytes: number; freeBytes: number };
}
