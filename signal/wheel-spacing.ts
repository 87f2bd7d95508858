/**
 * Where a wheel's teeth stand, learnt from whole turns: mean and spread.
 *
 * The shaft's angle is the cubic through four passes of the SAME tooth, which the wheel's own unevenness cannot bend: the
 * middle turn of the three is judged, so that speeding up, and speeding up ever more, leaves nothing behind. Turns of a shaft
 * that changes its speed by more than a tenth a turn, or by fits, teach nothing.
 */

/** Means of spacing run over about so many turns; those of recent steps over fewer. */
const memoryTurns = 8;
export const recentTurns = 4;
/** Turns that such means are worth: (2 - g) / g for a gain g of one over them. */
export const memoryWorth = 2 * memoryTurns - 1;
export const recentWorth = 2 * recentTurns - 1;
const mostChange = 0.1;
const mostFits = 0.03;

export class WheelSpacing {
  /** Turns that were learnt from. */
  turns = 0;
  /** Measured less nominal angle, degrees, by position; NaN: not known. */
  readonly spacingDeg: Float64Array;
  /** From the tooth before to this one, above a whole pitch, as a share of it: mean, and variance of single turns. */
  readonly step: Float64Array;
  readonly stepVariance: Float64Array;
  /** Mean of the last few. */
  readonly recentStep: Float64Array;
  private readonly positions: number;
  private readonly learnt: Uint8Array;

  constructor(positions: number) {
    this.positions = positions;
    this.spacingDeg = new Float64Array(positions);
    this.step = new Float64Array(positions);
    this.stepVariance = new Float64Array(positions);
    this.recentStep = new Float64Array(positions);
    this.learnt = new Uint8Array(positions);
    this.forget();
  }

  forget(): void {
    this.turns = 0;
    this.spacingDeg.fill(NaN);
    this.step.fill(NaN);
    this.stepVariance.fill(NaN);
    this.recentStep.fill(NaN);
    this.learnt.fill(0);
  }

  /** The turn with its teeth at `times`, from `fromS` to `toS`; the same tooth passed at `beforeS` and `afterS` too. Overwrites `times`. */
  learn(
    times: Float64Array,
    startPosition: number,
    beforeS: number,
    fromS: number,
    toS: number,
    afterS: number,
  ): void {
    const { positions, spacingDeg } = this;
    const turnS = toS - fromS;
    const before = (beforeS - fromS) / turnS;
    const after = (afterS - fromS) / turnS;
    const slower = -before - 1;
    const faster = after - 2;
    if (Math.abs(slower) > mostChange || Math.abs(faster) > mostChange) return;
    if (Math.abs(slower + faster) > mostFits) return;
    // Newton's divided differences of -1, 0, 1, 2 turns over before, 0, 1, after.
    const second = 2 / (1 - before);
    const third = (second - 1) / before;
    const fourth = ((3 / (after - before) - second) / (after - 1) - third) / after;
    let sum = 0;
    let seen = 0;
    let last = NaN;
    for (let k = 0; k <= positions; k++) {
      const position = (startPosition + k) % positions;
      const u = k === positions ? 1 : (times[position]! - fromS) / turnS;
      const turns = u + u * (u - 1) * (third + fourth * (u - before));
      const off = turns * positions - k;
      if (!Number.isNaN(off - last)) this.learnStep(position, off - last);
      last = off;
      if (k === positions || Number.isNaN(off)) continue;
      times[position] = off;
      sum += off;
      seen++;
    }
    const gain = Math.max(1 / memoryTurns, 1 / (this.turns + 1));
    const mean = sum / seen;
    for (let k = 0; k < positions; k++) {
      const errorDeg = (360 * (times[k]! - mean)) / positions;
      if (Number.isNaN(errorDeg)) continue;
      const old = spacingDeg[k]!;
      spacingDeg[k] = Number.isNaN(old) ? errorDeg : old + gain * (errorDeg - old);
    }
    this.turns++;
  }

  private learnStep(position: number, here: number): void {
    const { step, stepVariance, recentStep, learnt } = this;
    const n = learnt[position]! + 1;
    const gain = n < memoryTurns ? 1 / n : 1 / memoryTurns;
    learnt[position] = Math.min(n, memoryTurns);
    const old = n === 1 ? here : step[position]!;
    const change = here - old;
    step[position] = old + gain * change;
    stepVariance[position] = n === 1 ? 0 : (1 - gain) * (stepVariance[position]! + gain * change * change);
    const recent = recentStep[position]!;
    recentStep[position] = n <= recentTurns ? step[position]! : recent + (here - recent) / recentTurns;
  }
}
