/**
 * A tone in the raw signal so near the sample rate that only neighbouring samples show it: the share of a burst's power that
 * one sine holds (two parameters of a least-squares fit), averaged over bursts. White noise gives any one sine 2 of 24 parts
 * of it (2 of 23 without the mean), and on average over eight bursts no sine among all of them a fifth.
 */
import { burstLength } from '@/signal/noise';
import type { NoiseMeter } from '@/signal/noise';

/** Places of the grid for a whole cycle a sample: quarters of what a burst can tell apart. */
const cycle = 4 * burstLength;
const first = 2;
const last = cycle / 2;
const averaged = 8;
const fewest = 6;
const leastShare = 0.35;
/** Slower than this a burst holds less than two cycles: a drift looks the same. */
const slowest = 2 / burstLength;

/** For each place a cosine and a sine without their means, one orthogonal to the other, of length 1. */
const cosines = new Float64Array((last + 1) * burstLength);
const sines = new Float64Array((last + 1) * burstLength);
for (let f = first; f <= last; f++) {
  const of = (wave: (x: number) => number): Float64Array => {
    const samples = Float64Array.from({ length: burstLength }, (_, i) => wave((2 * Math.PI * f * i) / cycle));
    const mean = samples.reduce((sum, x) => sum + x, 0) / burstLength;
    return samples.map((x) => x - mean);
  };
  const cosine = unit(of(Math.cos));
  const sine = of(Math.sin);
  const common = cosine.reduce((sum, x, i) => sum + x * sine[i]!, 0);
  cosines.set(cosine, f * burstLength);
  // At half the sample rate there is no sine.
  if (f < last) sines.set(unit(sine.map((x, i) => x - common * cosine[i]!)), f * burstLength);
}

function unit(samples: Float64Array): Float64Array {
  const size = Math.sqrt(samples.reduce((sum, x) => sum + x * x, 0));
  return samples.map((x) => x / size);
}

export class BurstTone {
  /** Cycles a sample, 0 to a half (what is quicker folds to there), and peak to peak; NaN: no tone. */
  cyclesPerSample = NaN;
  swingV = NaN;
  private readonly shares = new Float64Array(last + 1);
  private squareV = 0;
  private count = 0;
  private seen = -1;

  restart(): void {
    if (this.count === 0) return;
    this.shares.fill(0);
    this.count = this.squareV = 0;
    this.cyclesPerSample = this.swingV = NaN;
  }

  /**
   * Takes the burst that is whole now, if it is a new one.
   * @param leastV peak to peak; no tone that is sought is smaller.
   */
  take({ burst, filled, seen }: NoiseMeter, leastV: number): void {
    if (filled !== 0 || seen === 0 || seen === this.seen) return;
    this.seen = seen;
    const { shares } = this;
    let sum = 0;
    for (let i = 0; i < burstLength; i++) sum += burst[i]!;
    const meanV = sum / burstLength;
    let power = 0;
    for (let i = 0; i < burstLength; i++) power += (burst[i]! - meanV) ** 2;
    const isFlat = !(power > (burstLength * leastV * leastV) / 8);
    this.count = Math.min(this.count + 1, averaged);
    this.squareV += (power / burstLength - this.squareV) / this.count;
    let best = -1;
    for (let f = first; f <= last; f++) {
      let share = 0;
      if (!isFlat) {
        let re = 0;
        let im = 0;
        for (let i = 0, at = f * burstLength; i < burstLength; i++, at++) {
          const x = burst[i]! - meanV;
          re += x * cosines[at]!;
          im += x * sines[at]!;
        }
        share = (re * re + im * im) / power;
      }
      shares[f]! += (share - shares[f]!) / this.count;
      if (f >= slowest * cycle && (best < 0 || shares[f]! > shares[best]!)) best = f;
    }
    const isTone = this.count >= fewest && shares[best]! >= leastShare;
    this.cyclesPerSample = isTone ? best / cycle : NaN;
    this.swingV = isTone ? 2 * Math.sqrt(2 * shares[best]! * this.squareV) : NaN;
  }

  /** Mean share of the power of bursts that a sine of so many cycles a sample holds; what is too slow counts as the slowest. */
  shareAt(cyclesPerSample: number): number {
    return this.shares[Math.min(last, Math.max(first, Math.round(cyclesPerSample * cycle)))]!;
  }
}
