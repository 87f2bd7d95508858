/**
 * How far teeth lie from where they should, measured in the stream itself: noise, uneven teeth, quantisation and jitter
 * together, whatever their cause.
 *
 * Four teeth in a row are held against an even acceleration: the third divided difference of place over time,
 * sum c_i p_i with c_i = 1 / prod (t_i - t_j), is 0 for any quadratic, so that starts and ramps do not show. Teeth that are
 * off their places by s (rms, in positions) make it s sqrt(sum c_i^2). Source: formula (Newton's divided differences).
 */
import type { SpeedRing } from '@/signal/speed-ring';

/** Teeth off by 3 % of the pitch are presumed, with the weight of so many, until some have been seen. */
const presumed = 0.03;
const presumedWeight = 2;
/** What is remembered of a wheel across a stop, in teeth. */
const keptWeight = 8;
const shortestMemory = 48;
const longestMemory = 512;
/** From then on a few teeth more or less change the factor for small samples by next to nothing. */
const settledWeight = 46;
/** So many times the scatter is no scatter any more. */
const outlier = 5;
/** Positions; see `isSlip`. */
const slip = 1 / 3;

/**
 * Factor on a standard error from `freedom` degrees of freedom, so that two of it still hold 95 % (Student's t against the
 * normal distribution, within 2 % from 3 on).
 */
export function smallSample(freedom: number): number {
  return 1 + (1.2 + 1.8 / freedom) / freedom;
}

export class SpeedScatter {
  /** Variance of one tooth's place, positions squared, wide enough for what little it may come from. */
  variance = NaN;
  /** The newest tooth lies so far from where those before it point, positions: more than scatter. */
  doubt = NaN;
  /** Number of the ring's entry that is in doubt. */
  doubtAt = -1;
  private readonly ring: SpeedRing;
  private readonly fading: number;
  private sum = presumedWeight * presumed ** 2;
  private weight = presumedWeight;
  private factor = NaN;

  constructor(ring: SpeedRing, turnPositions: number) {
    this.ring = ring;
    this.fading = 1 - 1 / Math.min(longestMemory, Math.max(shortestMemory, 2 * turnPositions));
    this.refresh();
  }

  /** Stop, gap or reversal: the wheel is the same, the noise need not be. */
  loosen(): void {
    const share = Math.min(1, keptWeight / this.weight);
    this.sum *= share;
    this.weight *= share;
    this.doubtAt = -1;
    this.refresh();
  }

  /** The places that teeth are held against are others. @param variance to be expected, positions squared; NaN: not known. */
  presume(variance: number): void {
    this.loosen();
    if (!(variance >= 0)) return;
    this.sum = keptWeight * variance;
    this.weight = keptWeight;
    this.refresh();
  }

  /** How much of what is presumed, rather than seen, is in the variance: 1 to begin with. */
  get ignorance(): number {
    return presumedWeight / this.weight;
  }

  get isIgnorant(): boolean {
    return this.weight < settledWeight;
  }

  /** The doubt may be a tooth that did not show, or a pulse that is none. */
  get isSlip(): boolean {
    return this.doubt > slip;
  }

  /** Takes the ring's newest tooth. */
  note(): void {
    const { times, places, marks, mask, next, first } = this.ring;
    if (next - first < 4) return;
    const i3 = (next - 1) & mask;
    const i2 = (next - 2) & mask;
    const i1 = (next - 3) & mask;
    const i0 = (next - 4) & mask;
    const d23 = times[i3]! - times[i2]!;
    const d12 = times[i2]! - times[i1]!;
    const d01 = times[i1]! - times[i0]!;
    const d13 = d12 + d23;
    const d02 = d01 + d12;
    const d03 = d01 + d13;
    // All c times the product of all differences, which leaves the ratio as it is and takes no division.
    const c3 = d01 * d02 * d12;
    const c2 = -d01 * d03 * d13;
    const c1 = d02 * d03 * d23;
    const c0 = c1 + c2 + c3;
    const p0 = marks[i0]!;
    const misfit = c1 * (marks[i1]! - p0) + c2 * (marks[i2]! - p0) + c3 * (marks[i3]! - p0);
    let square = (misfit * misfit) / (c0 * c0 + c1 * c1 + c2 * c2 + c3 * c3);
    if (!(square < Infinity)) return;
    const most = (outlier * outlier * this.sum) / this.weight;
    if (square > most) {
      square = most;
      // The same tooth is among the next three as well, and must not be taken for theirs.
      if (next - 1 - this.doubtAt > 3) {
        this.doubt = Math.min(Math.abs(misfit / c3), 1 + places[i3]! - places[i2]!);
        this.doubtAt = next - 1;
      }
    }
    this.sum = this.sum * this.fading + square;
    this.weight = this.weight * this.fading + 1;
    this.refresh();
  }

  private refresh(): void {
    // Neighbouring differences share teeth: 2.3 of them tell as much as one.
    if (this.weight < settledWeight) this.factor = smallSample(2 + this.weight / 2.3) ** 2;
    this.variance = (this.factor * this.sum) / this.weight;
  }
}
