import type { Past } from '@/signal/past';

/** Signal kept while levels are sought for the first time, so that its edges are found afterwards: 5 s at most. */
const mostS = 5;
const most = 65_536;

export class Remembered implements Past {
  readonly reach = Infinity;
  /** `v[0]` is the sample before the first that is kept, `v[j]` sample `base + j` of the stream. */
  v = new Float64Array(256);
  count = 0;
  base: number;
  private readonly most: number;

  constructor(rateHz: number, base: number) {
    this.base = base;
    this.most = Math.min(most, Math.max(256, Math.ceil(mostS * rateHz)));
  }

  get from(): number {
    return this.base + 1;
  }

  restart(base: number): void {
    this.count = 0;
    this.base = base;
  }

  /** Keeps `v[from..to]`, ends included. @returns false where that is more than may be kept. */
  keep(v: Float64Array, from: number, to: number): boolean {
    const count = this.count + (to - from + 1);
    if (count > this.most) return false;
    if (this.count === 0) this.v[0] = v[from - 1]!;
    while (count + 1 > this.v.length) {
      const wider: Float64Array<ArrayBuffer> = new Float64Array(this.v.length * 2);
      wider.set(this.v);
      this.v = wider;
    }
    this.v.set(v.subarray(from, to + 1), this.count + 1);
    this.count = count;
    return true;
  }
}
