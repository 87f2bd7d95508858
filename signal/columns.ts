/** Columns that grow by doubling: output is written by index, never as objects per sample or per edge. */
import type { EdgeColumns, RejectedColumns, SpeedColumns } from '@/signal/pipeline-types';

const startLength = 64;

function grown(old: Float64Array): Float64Array {
  const wider = new Float64Array(old.length * 2);
  wider.set(old);
  return wider;
}

function grownFlags(old: Uint8Array): Uint8Array {
  const wider = new Uint8Array(old.length * 2);
  wider.set(old);
  return wider;
}

/** Empty. Instants in s on the stream's axis, flags as `pipeline-types.ts` names them; `count` of each column are valid. */
export function createEdgeColumns(): EdgeColumns {
  return {
    count: 0,
    t: new Float64Array(startLength),
    midT: new Float64Array(startLength),
    flags: new Uint8Array(startLength),
  };
}

// What seldom happens is apart from what happens at every edge, so that the latter is small enough to be inlined.

/** Index of a new edge, whose columns are for the caller to write. */
export function roomForEdge(columns: EdgeColumns): number {
  if (columns.count === columns.t.length) widenEdges(columns);
  return columns.count++;
}

function widenEdges(columns: EdgeColumns): void {
  columns.t = grown(columns.t);
  columns.midT = grown(columns.midT);
  columns.flags = grownFlags(columns.flags);
}

/** Empty: crossings that the hold-off ate, s on the stream's axis. */
export function createRejectedColumns(): RejectedColumns {
  return { count: 0, t: new Float64Array(startLength) };
}

export function pushRejected(columns: RejectedColumns, t: number): void {
  if (columns.count === columns.t.length) columns.t = grown(columns.t);
  columns.t[columns.count] = t;
  columns.count++;
}

/** Empty: speed in rpm, signed, NaN where it is not known, with its standard error, at instants in s. */
export function createSpeedColumns(): SpeedColumns {
  return {
    count: 0,
    t: new Float64Array(startLength),
    rpm: new Float64Array(startLength),
    errorRpm: new Float64Array(startLength),
  };
}

/** Index of a new entry, whose columns are for the caller to write. */
export function roomForSpeed(columns: SpeedColumns): number {
  if (columns.count === columns.t.length) widenSpeed(columns);
  return columns.count++;
}

function widenSpeed(columns: SpeedColumns): void {
  columns.t = grown(columns.t);
  columns.rpm = grown(columns.rpm);
  columns.errorRpm = grown(columns.errorRpm);
}

export function pushSpeed(columns: SpeedColumns, t: number, rpm: number, errorRpm: number): void {
  const i = roomForSpeed(columns);
  columns.t[i] = t;
  columns.rpm[i] = rpm;
  columns.errorRpm[i] = errorRpm;
}

/** What one channel's detector saw, waiting to be merged with the other channels' in order of time. */
export type EdgeQueue = {
  head: number;
  count: number;
  /** When the band switched, samples on the stream's axis, delay not taken off: the order of merging. */
  at: Float64Array;
  /** Mid crossing, s, delay not taken off. */
  midS: Float64Array;
  delayS: Float64Array;
  /** Standard error of the mid crossing, s; NaN where the noise is not known. */
  sigmaS: Float64Array;
  /** Of that error what the line between two samples makes, rms, s: alike for edges that lie alike between samples; 0: not known. */
  gridS: Float64Array;
  /** Samples a second; NaN: not known. */
  rateHz: number;
  /** The peak before a falling, the trough before a rising edge, V. */
  extremeV: Float64Array;
  /** As in `EdgeColumns`, and `delayGuessed`. */
  flags: Uint8Array;
};

/** Queue flag: no full period had been seen yet, so that the delay taken off is the one at 0 Hz. */
export const delayGuessed = 4;

/** Empty. What was taken is not cut off at once: entries from `head` to before `count` still wait. */
export function createEdgeQueue(rateHz = NaN): EdgeQueue {
  return {
    head: 0,
    count: 0,
    at: new Float64Array(startLength),
    midS: new Float64Array(startLength),
    delayS: new Float64Array(startLength),
    sigmaS: new Float64Array(startLength),
    gridS: new Float64Array(startLength),
    rateHz,
    extremeV: new Float64Array(startLength),
    flags: new Uint8Array(startLength),
  };
}

/** Index of a new entry, whose columns are for the caller to write. */
export function roomInQueue(queue: EdgeQueue): number {
  if (queue.head === queue.count) queue.head = queue.count = 0;
  if (queue.count === queue.at.length) widenQueue(queue);
  return queue.count++;
}

function widenQueue(queue: EdgeQueue): void {
  queue.at = grown(queue.at);
  queue.midS = grown(queue.midS);
  queue.delayS = grown(queue.delayS);
  queue.sigmaS = grown(queue.sigmaS);
  queue.gridS = grown(queue.gridS);
  queue.extremeV = grown(queue.extremeV);
  queue.flags = grownFlags(queue.flags);
}
