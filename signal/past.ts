/** Filtered volts that were scanned already, so that a stretch that turns out to matter can be looked through again. */
export type Past = {
  readonly v: Float64Array;
  /** `v[j]` is sample `base + j` of the stream. */
  readonly base: number;
  /** Earliest sample of the stream that may be looked at. */
  readonly from: number;
  /** Samples that one can be sure of, back from any of the newest. */
  readonly reach: number;
};

const lookBackS = 0.2;
const fewest = 1024;
const most = 8192;

/** The last samples: the newest chunk and at least `reach` before it. */
export class History implements Past {
  readonly v: Float64Array;
  base = 0;
  from: number;
  readonly reach: number;
  private last = 0;

  /** @param chunk samples that are taken at once, at most. @param from nothing is there before this sample. */
  constructor(rateHz: number, chunk: number, from: number) {
    const wanted = Math.min(most, Math.max(fewest, lookBackS * rateHz));
    this.reach = 2 ** Math.round(Math.log2(wanted));
    this.v = new Float64Array(2 * this.reach + chunk + 1);
    this.from = from;
  }

  /** Takes `source[from..to]`, ends included; the first is sample `at`. */
  take(source: Float64Array, from: number, to: number, at: number): void {
    const { v, reach } = this;
    const count = to - from + 1;
    if (this.last + count >= v.length) {
      v.copyWithin(0, this.last - reach, this.last + 1);
      this.last = reach;
    }
    v.set(source.subarray(from, to + 1), this.last + 1);
    this.last += count;
    this.base = at + count - 1 - this.last;
  }
}
