/**
 * About a thousand filtered samples a second of one channel, the last two seconds of them: enough to see hum and ripple
 * by. They are picked, not averaged, so that anything above half their rate folds down: whoever reads them has to know
 * what the wheel folds to.
 */
export type SlowRing = {
  /** Every so many samples of the stream one is kept. */
  readonly stride: number;
  /** Samples kept a second. */
  readonly rateHz: number;
  readonly v: Float64Array;
  readonly mask: number;
  /** Kept so far; kept sample `n` is at `n & mask`, and is valid while `n >= count - v.length`. */
  count: number;
  /** First one after the last lost samples. */
  unbrokenFrom: number;
};

const wantedHz = 1000;
const length = 2048;

/** Empty, at the whole part of the rate that comes nearest to a thousand samples a second. */
export function createSlowRing(rateHz: number): SlowRing {
  const stride = Math.max(1, Math.round(rateHz / wantedHz));
  return {
    stride,
    rateHz: rateHz / stride,
    v: new Float64Array(length),
    mask: length - 1,
    count: 0,
    unbrokenFrom: 0,
  };
}

/** Takes what is due of `v[from..from + count)`, whose first is sample `at` of the stream. */
export function keepSlow(ring: SlowRing, v: Float64Array, from: number, count: number, at: number): void {
  const { stride, mask } = ring;
  let kept = ring.count;
  for (let i = (stride - (at % stride)) % stride; i < count; i += stride)
    ring.v[kept++ & mask] = v[from + i]!;
  ring.count = kept;
}
