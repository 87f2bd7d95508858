/**
 * The low orders of something known tooth by tooth: mean and cosines by least squares, so that positions without a value
 * do no harm. The same numbers as `orderSpectrum` gives for a full turn, at a fraction of its cost and without new arrays.
 */
export class WheelOrders {
  readonly positions: number;
  mean = NaN;
  /** Values that were there. */
  count = 0;
  /** What the mean and the orders leave; NaN where there was no value. */
  readonly left: Float64Array;
  /** Mean square of the values about their mean, and of what is left. */
  variance = NaN;
  leftVariance = NaN;
  private readonly cosines: Float64Array;
  private readonly sines: Float64Array;
  private readonly re: Float64Array;
  private readonly im: Float64Array;
  private apart: Uint8Array | null = null;

  /** @param mostOrders that `fit` will be asked for. */
  constructor(positions: number, mostOrders: number) {
    this.positions = positions;
    this.left = new Float64Array(positions);
    this.cosines = Float64Array.from({ length: positions }, (_, k) =>
      Math.cos((2 * Math.PI * k) / positions),
    );
    this.sines = Float64Array.from({ length: positions }, (_, k) => Math.sin((2 * Math.PI * k) / positions));
    this.re = new Float64Array(mostOrders + 1);
    this.im = new Float64Array(mostOrders + 1);
  }

  /** Amplitude (half of peak to peak) of order `r` of the last fit, in the unit of the values. */
  amplitude(r: number): number {
    return Math.hypot(this.re[r]!, this.im[r]!);
  }

  /**
   * @param values by position, NaN where there is none. @param orders that are taken out, 0: the mean alone.
   * @param apart positions (1) that shall not bend the fit: their values stand in `left` all the same, and count nowhere.
   */
  fit(values: Float64Array, orders: number, apart: Uint8Array | null = null): void {
    const { left, re, im } = this;
    this.apart = apart;
    left.set(values);
    re.fill(0);
    im.fill(0);
    this.mean = 0;
    this.takeMean();
    this.variance = this.meanSquare();
    // One pass is exact on a full turn; with gaps the orders lean on each other.
    const passes = orders > 0 && this.count < this.positions ? 8 : 1;
    for (let pass = 0; pass < passes; pass++) {
      for (let r = 1; r <= orders; r++) this.takeOrder(r);
      if (passes > 1) this.takeMean();
    }
    this.leftVariance = orders > 0 ? this.meanSquare() : this.variance;
  }

  private takeMean(): void {
    const { left, apart } = this;
    let sum = 0;
    let count = 0;
    for (let k = 0; k < left.length; k++) {
      const value = left[k]!;
      if (Number.isNaN(value) || apart?.[k] === 1) continue;
      sum += value;
      count++;
    }
    const mean = sum / count;
    for (let k = 0; k < left.length; k++) left[k] = left[k]! - mean;
    this.mean += mean;
    this.count = count;
  }

  private takeOrder(r: number): void {
    const { left, cosines, sines, positions, apart } = this;
    let re = 0;
    let im = 0;
    let cc = 0;
    let cs = 0;
    let ss = 0;
    for (let k = 0, at = 0; k < positions; k++, at = (at + r) % positions) {
      const value = left[k]!;
      if (Number.isNaN(value) || apart?.[k] === 1) continue;
      const c = cosines[at]!;
      const s = sines[at]!;
      re += value * c;
      im += value * s;
      cc += c * c;
      cs += c * s;
      ss += s * s;
    }
    const det = cc * ss - cs * cs;
    // The highest order of an even wheel has no sine.
    const a = det > 1e-9 * cc * cc ? (re * ss - im * cs) / det : re / cc;
    const b = det > 1e-9 * cc * cc ? (im * cc - re * cs) / det : 0;
    for (let k = 0, at = 0; k < positions; k++, at = (at + r) % positions)
      left[k] = left[k]! - a * cosines[at]! - b * sines[at]!;
    this.re[r] = this.re[r]! + a;
    this.im[r] = this.im[r]! + b;
  }

  private meanSquare(): number {
    const { left, apart } = this;
    let sum = 0;
    for (let k = 0; k < left.length; k++)
      if (!Number.isNaN(left[k]!) && apart?.[k] !== 1) sum += left[k]! * left[k]!;
    return sum / this.count;
  }
}

/** The middle one of the magnitudes that are not NaN; NaN where there is none. @param scratch at least as long; is overwritten. */
export function middleMagnitude(values: ArrayLike<number>, scratch: Float64Array): number {
  let count = 0;
  for (let k = 0; k < values.length; k++)
    if (!Number.isNaN(values[k]!)) scratch[count++] = Math.abs(values[k]!);
  return count === 0 ? NaN : scratch.subarray(0, count).sort()[count >> 1]!;
}
