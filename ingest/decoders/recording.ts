/** A long body (CSV, SenML) as read: one even run of samples, in pieces that fit a block. */
import type { SampleArray } from '@/signal/model';
import { blockLimits } from '../block';
import type { Block, IngestIssue } from '../block';
import { invalid } from './result';

export type Recording = {
  rateHz: number;
  /** The board's clock at the first sample, s. */
  timeS: number;
  channels: string[];
  /** Samples of each channel. */
  length: number;
  /** For each piece, the samples of each channel. All but the last piece are full. */
  pieces: SampleArray[][];
};

export type RecordingResult = { ok: true; recording: Recording } | { ok: false; issue: IngestIssue };

/**
 * Work in steps, so that a body of many megabytes does not hold up the event loop: the caller lets other work run
 * between the steps, or not.
 */
export type Steps<T> = Generator<undefined, T, undefined>;

export function runAtOnce<T>(steps: Steps<T>): T {
  for (;;) {
    const step = steps.next();
    if (step.done) return step.value;
  }
}

/** `pause` resolves when the next step may run. */
export async function runInSteps<T>(steps: Steps<T>, pause: () => Promise<void>): Promise<T> {
  for (;;) {
    const step = steps.next();
    if (step.done) return step.value;
    await pause();
  }
}

/** The recording as blocks with consecutive sequence numbers from `firstSeq` on. */
export function cutRecording(
  recording: Recording,
  stream: string,
  firstSeq: number,
): { ok: true; blocks: Block[] } | { ok: false; issue: IngestIssue } {
  const { rateHz, timeS, channels, pieces } = recording;
  if (firstSeq + pieces.length - 1 > blockLimits.maxSeq)
    return { ok: false, issue: invalid('The sequence numbers of this body pass the highest that there is.') };
  let start = 0;
  const blocks = pieces.map((piece, i): Block => {
    const length = piece[0]!.length;
    const block = {
      stream,
      seq: firstSeq + i,
      rateHz,
      timeS: timeS + start / rateHz,
      length,
      channels: channels.map((name, c) => ({ name, samples: piece[c]! })),
    };
    start += length;
    return block;
  });
  return { ok: true, blocks };
}

type Growing = Float64Array | Int32Array | Int8Array;

/** Numbers collected one by one into pieces of a block's length; a full piece is never copied. */
export type Pieces<A extends Growing> = {
  push(value: number): void;
  at(index: number): number;
  length(): number;
  /** All pieces; the last is cut to its length. */
  finish(): A[];
};

export function createPieces<A extends Growing>(make: (length: number) => A): Pieces<A> {
  const size = blockLimits.maxSamplesPerChannel;
  const full: A[] = [];
  let current = make(64);
  let used = 0;
  return {
    push(value) {
      if (used === current.length) {
        if (used === size) {
          full.push(current);
          current = make(64);
          used = 0;
        } else {
          const longer = make(Math.min(size, used * 4));
          longer.set(current);
          current = longer;
        }
      }
      current[used++] = value;
    },
    at: (index) => {
      const piece = Math.floor(index / size);
      return (piece < full.length ? full[piece]! : current)[index % size]!;
    },
    length: () => full.length * size + used,
    finish: () => (used === 0 ? full : [...full, current.slice(0, used) as A]),
  };
}
