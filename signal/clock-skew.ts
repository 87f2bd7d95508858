/**
 * How much faster or slower a board's sample clock runs than the hub's clock, from when its blocks arrive.
 *
 * A block is never early: the delay of its way is added to the offset between both clocks. So only the least offset of
 * each five seconds counts (lower envelope), and the slope through those is the median of the slopes of all pairs
 * (Theil-Sen: H. Theil 1950; P. K. Sen, J. Am. Stat. Assoc. 63 (1968) 1379), which a stretch of late blocks does not bend.
 */
const binS = 5;
const mostBins = 60;
const fewestBins = 6;
/** A way through a network is not known to better than this, s. */
const leastJitterS = 0.001;
const madToSigma = 1.4826;

export type Skew = {
  /** Positive: the board's samples come faster than declared. */
  ppm: number;
  /** Standard error. */
  errorPpm: number;
  overS: number;
};

/** Feed it every block as it arrives; five minutes of arrivals are remembered. */
export class ClockSkew {
  /** Finished bins, oldest first: hub time and offset (hub less stream), s. */
  private atS: number[] = [];
  private offsetS: number[] = [];
  private binFromS = NaN;
  private leastS = NaN;
  private leastAtS = NaN;

  /** Begins anew: the stream's time jumped. */
  restart(): void {
    this.atS = [];
    this.offsetS = [];
    this.binFromS = NaN;
  }

  /**
   * A block ended at `streamS` of the stream and was there at `hubS`.
   * @returns true where a further stretch of five seconds is over, so that `fit` has news.
   */
  add(streamS: number, hubS: number): boolean {
    const offset = hubS - streamS;
    let finished = false;
    if (!(hubS - this.binFromS < binS)) {
      if (hubS - this.binFromS < 4 * binS) {
        this.keep();
        finished = true;
      } else {
        this.restart();
      }
      this.binFromS = hubS;
      this.leastS = Infinity;
    }
    if (offset < this.leastS) {
      this.leastS = offset;
      this.leastAtS = hubS;
    }
    return finished;
  }

  /** Null until half a minute has been seen. */
  fit(): Skew | null {
    const { atS, offsetS } = this;
    const n = atS.length;
    if (n < fewestBins) return null;
    const slopes: number[] = [];
    for (let i = 0; i < n; i++)
      for (let j = i + 1; j < n; j++) slopes.push((offsetS[j]! - offsetS[i]!) / (atS[j]! - atS[i]!));
    const slope = median(slopes);
    const levels = atS.map((t, i) => offsetS[i]! - slope * t);
    const level = median(levels);
    const scatter = Math.max(leastJitterS, madToSigma * median(levels.map((x) => Math.abs(x - level))));
    const mean = atS.reduce((sum, t) => sum + t, 0) / n;
    const spread = Math.sqrt(atS.reduce((sum, t) => sum + (t - mean) ** 2, 0));
    // Offset falls while the board is fast. The stream's own second is the board's.
    return { ppm: -1e6 * slope, errorPpm: (1e6 * scatter) / spread, overS: atS[n - 1]! - atS[0]! };
  }

  private keep(): void {
    this.atS.push(this.leastAtS);
    this.offsetS.push(this.leastS);
    if (this.atS.length > mostBins) {
      this.atS.shift();
      this.offsetS.shift();
    }
  }
}

function median(values: readonly number[]): number {
  const sorted = Float64Array.from(values).sort();
  const half = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[half]! : (sorted[half - 1]! + sorted[half]!) / 2;
}
