/**
 * What a signal did between two edges of the band: bumps that did not make it. In a stretch on the low side they are
 * looked for upwards, in one on the high side downwards; all heights are then turned over, so that the search is one.
 */
const most = 16;

export class Stretch {
  /** Bumps found; the columns hold those. */
  count = 0;
  /** Middle of the bump at half its height, samples on the stream's axis. */
  readonly at = new Float64Array(most);
  readonly widthSamples = new Float64Array(most);
  readonly extremeV = new Float64Array(most);
  /** How far it stands out from the higher one of its two sides, V. */
  readonly heightV = new Float64Array(most);
  /** What the signal came back to between bumps and edges at the least, V: none of the troughs is above it. */
  returnV = NaN;
  private readonly index = new Int32Array(most);
  /** What the signal came back to before each bump, and after the last one; V, turned over where looking downwards. */
  private readonly sideV = new Float64Array(most + 1);

  /**
   * @param v volts; `v[from..to]` lie between the edges, the flanks of both may be among them.
   * @param base `v[j]` is sample `base + j` of the stream.
   * @param up bumps from the low side; else from the high side.
   * @param leastV how far a bump must stand out.
   */
  search(v: Float64Array, from: number, to: number, base: number, up: boolean, leastV: number): void {
    this.count = 0;
    const sign = up ? 1 : -1;
    let low = Infinity;
    let high = -Infinity;
    let highAt = from;
    let rising = false;
    for (let j = from; j <= to; j++) {
      const x = sign * v[j]!;
      if (rising) {
        if (x > high) {
          high = x;
          highAt = j;
        } else if (high - x >= leastV) {
          if (this.count === most) break;
          this.extremeV[this.count] = high;
          this.sideV[this.count] = low;
          this.index[this.count++] = highAt;
          rising = false;
          low = x;
        }
      } else if (x < low) {
        low = x;
      } else if (x - low >= leastV) {
        rising = true;
        high = x;
        highAt = j;
      }
    }
    this.sideV[this.count] = low;
    this.returnV = low;
    for (let k = 0; k < this.count; k++) this.measure(v, k, base, from, to, sign);
    this.returnV *= sign;
  }

  /**
   * Highest of the troughs between bumps found upwards, V. What comes before the first one is left out, and what comes after
   * the last one too: the signal may still be on its way down.
   */
  troughV(): number {
    let highest = -Infinity;
    for (let k = 1; k < this.count; k++) highest = Math.max(highest, this.sideV[k]!);
    return highest;
  }

  /** The outermost of `v[from..to]`, bump or not, V. */
  reachV(v: Float64Array, from: number, to: number, up: boolean): number {
    const sign = up ? 1 : -1;
    let reach = -Infinity;
    for (let j = from; j <= to; j++) if (sign * v[j]! > reach) reach = sign * v[j]!;
    return sign * reach;
  }

  private measure(v: Float64Array, k: number, base: number, from: number, to: number, sign: number): void {
    const { index, sideV, extremeV } = this;
    const peak = extremeV[k]!;
    const side = Math.max(sideV[k]!, sideV[k + 1]!);
    this.returnV = Math.max(this.returnV, side);
    const half = (peak + side) / 2;
    let left = index[k]!;
    let right = left;
    while (left > from && sign * v[left - 1]! > half) left--;
    while (right < to && sign * v[right + 1]! > half) right++;
    this.at[k] = base + (left + right) / 2;
    this.widthSamples[k] = right - left + 1;
    this.heightV[k] = peak - side;
    extremeV[k] = sign * peak;
  }
}
