/**
 * The last teeth of one channel as columns in a ring: what rules of findings and statistics read at ticks.
 *
 * A tooth begins with a rising edge. Tooth `n` (counted from 0 since the stream began) is at index `n & mask` of each
 * column, and is valid while `n >= count - length`. Instants are mid crossings on the raw axis, delay taken off, in s.
 */
export type ToothLog = {
  /** Teeth begun so far. */
  count: number;
  readonly length: number;
  readonly mask: number;
  /** First tooth after the last lost samples: no interval reaches from the one before it. */
  unbrokenFrom: number;
  readonly riseS: Float64Array;
  /** NaN until the tooth has ended. */
  readonly fallS: Float64Array;
  /** Trough before the rise, V; NaN where it was not seen. */
  readonly troughV: Float64Array;
  /** Peak between rise and fall, V; NaN until the tooth has ended. */
  readonly peakV: Float64Array;
  /** Standard error of the rise from noise and slope, s; NaN where the noise is not known. */
  readonly sigmaS: Float64Array;
  /** From the mid crossing to the switching point, s. */
  readonly riseWayS: Float64Array;
  readonly fallWayS: Float64Array;
};

const shortest = 512;
const longest = 8192;

/** @param teethPerTurn four turns are kept, 512 to 8192 teeth. @param mostPerTick that many, where more can come in one tick. */
export function createToothLog(teethPerTurn: number, mostPerTick: number): ToothLog {
  const wanted = Math.max(shortest, Math.min(longest, 4 * teethPerTurn), mostPerTick);
  const length = 2 ** Math.ceil(Math.log2(wanted));
  const column = (): Float64Array => new Float64Array(length).fill(NaN);
  return {
    count: 0,
    length,
    mask: length - 1,
    unbrokenFrom: 0,
    riseS: column(),
    fallS: column(),
    troughV: column(),
    peakV: column(),
    sigmaS: column(),
    riseWayS: column(),
    fallWayS: column(),
  };
}

/** The first tooth not before `n` that can still be read and is of the unbroken row up to now. */
export function readableFrom(log: ToothLog, n: number): number {
  return Math.max(n, log.unbrokenFrom, log.count - log.length);
}

/** Samples were lost: the tooth at hand never ends. */
export function breakLog(log: ToothLog): void {
  log.unbrokenFrom = log.count;
}
