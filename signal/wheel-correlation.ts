/** How alike a series is to itself some steps later: running products at given lags, and whether what repeats is a mere tone. */

export class LagCorrelation {
  readonly lags: Int32Array;
  private readonly sums: Float64Array;
  private readonly ring: Float32Array;
  private readonly mask: number;
  private count = 0;
  private energy = 0;
  private errorEnergy = 0;

  constructor(lags: ArrayLike<number>) {
    this.lags = Int32Array.from(lags);
    this.sums = new Float64Array(lags.length);
    const length = 2 ** Math.ceil(Math.log2(this.lags.reduce((most, lag) => Math.max(most, lag), 0) + 1));
    this.ring = new Float32Array(length);
    this.mask = length - 1;
  }

  clear(): void {
    this.count = this.energy = this.errorEnergy = 0;
    this.sums.fill(0);
  }

  /** Takes the next value; one that is not finite counts as 0. @param error its standard error; 0: not known. */
  add(value: number, error: number): void {
    const { ring, mask, lags, sums, count } = this;
    const known = Number.isFinite(value) ? value : 0;
    ring[count & mask] = known;
    this.energy += known * known;
    this.errorEnergy += error * error;
    for (let i = 0; i < lags.length; i++) {
      const lag = lags[i]!;
      if (lag <= count) sums[i]! += known * ring[(count - lag) & mask]!;
    }
    this.count = count + 1;
  }

  pairs(i: number): number {
    return Math.max(0, this.count - this.lags[i]!);
  }

  /** Correlation coefficient at the lag with the index `i`; 0 where there is nothing to correlate. */
  at(i: number): number {
    const pairs = this.pairs(i);
    if (pairs === 0 || !(this.energy > 1e-12 * this.count)) return 0;
    return (this.sums[i]! / pairs) * (this.count / this.energy);
  }

  /** The variance in units of what the values' own errors make. */
  get overError(): number {
    return this.errorEnergy > 0 ? this.energy / this.errorEnergy : Infinity;
  }
}

/** Steps to either side of a lag that `unlikeTone` looks at. */
export const toneReach = 4;

/**
 * Correlations beside a lag, as shares of the one there, against those of a tone, cos(k w) k steps aside: the least sum of
 * squares over all w. A tone (hum, a shaft that sways) leaves 0, teeth that differ at random 0.4.
 * @param beside at 1 to `toneReach` steps aside, the mean of both sides.
 */
export function unlikeTone(beside: ArrayLike<number>): number {
  let least = Infinity;
  for (let step = 0; step <= 60; step++) {
    const w = (Math.PI * step) / 60;
    let sum = 0;
    for (let k = 1; k <= toneReach; k++) sum += (beside[k - 1]! - Math.cos(k * w)) ** 2;
    least = Math.min(least, sum);
  }
  return least;
}
