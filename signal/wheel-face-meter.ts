/**
 * What the wheel face draws and rules of findings judge: spacing and strength of every tooth over turns, mean and spread,
 * and which places stayed empty.
 *
 * Spacing is learnt from whole turns. The shaft's angle is the cubic through four passes of the SAME tooth, which the
 * wheel's own unevenness cannot bend: the middle turn of the three is judged, so that speeding up, and speeding up ever
 * more, leaves nothing behind. Turns of a shaft that changes its speed by more than a tenth a turn, or by fits, teach nothing.
 *
 * Positions are counted the way in which the wheel turned when they were learnt; `numberOf` says where that is on the wheel.
 */
import type { WheelFace } from '@/signal/model';
import { WheelAbsence } from '@/signal/wheel-absence';
import type { WheelSeat } from '@/signal/wheel-tracker';

/** Wheels with more positions are not drawn, and no single tooth of theirs is judged. */
export const mostPositions = 4096;

/** Means of spacing run over about so many turns; those of swing, and of recent steps, over fewer. */
const memoryTurns = 8;
const recentTurns = 4;
/** Turns that such means are worth: (2 - g) / g for a gain g of one over them. */
export const memoryWorth = 2 * memoryTurns - 1;
export const recentWorth = 2 * recentTurns - 1;
const mostChange = 0.1;
const mostFits = 0.03;

export interface TurnListener {
  /**
   * A whole turn is over.
   * @param times instant of the tooth at each position, s; NaN where none came. @param start position that the turn began
   * with. @param endS instant of that position's tooth a turn later, s. The array is used again for a later turn.
   */
  turn(times: Float64Array, start: number, endS: number): void;
}

export class WheelFaceMeter implements WheelSeat {
  readonly listeners: TurnListener[] = [];
  readonly absence: WheelAbsence;
  readonly positions: number;
  readonly missing: number;
  t = NaN;
  toothSwingV = NaN;
  /** Turns that were whole, and those that spacing was learnt from, since there was anything to be forgotten. */
  turns = 0;
  learntTurns = 0;
  /** Measured less nominal angle, degrees, by position; NaN: not known. */
  readonly spacingDeg: Float64Array;
  /** From the tooth before to this one, above a whole pitch, as a share of it: mean, variance of single turns, and mean of the last few. */
  readonly step: Float64Array;
  readonly stepVariance: Float64Array;
  readonly recentStep: Float64Array;
  /** Peak to peak, V. */
  readonly swingV: Float64Array;
  readonly swingVariance: Float64Array;
  readonly counts: Float64Array;
  /** Last pass, s. */
  readonly seenS: Float64Array;
  private readonly learnt: Uint8Array;
  /** Position that bears the number 0, or in reverse the one before it, where an index has told; else 0. */
  numberShift = 0;
  private isReversed = false;
  private isStale = false;
  private hasIndex = false;
  private started = false;
  private startPosition = 0;
  private lastPosition = 0;
  private lastT = NaN;
  private turnTimes: Float64Array;
  private timesBefore: Float64Array;
  /** When the turn before the one under way began, and the one before that, s; NaN: not with the same tooth. */
  private beganS = NaN;
  private beganBeforeS = NaN;

  constructor(positions: number, missing: number) {
    const column = (): Float64Array => new Float64Array(positions).fill(NaN);
    this.positions = positions;
    this.missing = missing;
    this.absence = new WheelAbsence(positions);
    this.spacingDeg = column();
    this.step = column();
    this.stepVariance = column();
    this.recentStep = column();
    this.swingV = column();
    this.swingVariance = column();
    this.counts = new Float64Array(positions);
    this.seenS = column();
    this.learnt = new Uint8Array(positions);
    this.turnTimes = column();
    this.timesBefore = column();
  }

  /** Position on the wheel of what was counted as `position`: a wheel that turns in reverse shows its teeth backwards. */
  numberOf(position: number): number {
    const { positions, missing, numberShift, isReversed } = this;
    if (missing > 0) return isReversed ? mirrored(position, positions, missing) : position;
    return (positions + (isReversed ? numberShift - position : position - numberShift)) % positions;
  }

  /** Numbers are fixed to the wheel, by its gap or by an index. */
  get isNumbered(): boolean {
    return this.missing > 0 ? !Number.isNaN(this.seenS[0]!) : this.hasIndex;
  }

  /** An index says that the tooth at `position` is the first that comes after it; what was learnt stays with its teeth. */
  numberFrom(position: number): void {
    const { positions } = this;
    this.hasIndex = true;
    this.numberShift = (this.isReversed ? position - 1 + positions : position) % positions;
  }

  /** How many positions the tooth at `position` comes after the first one that an index told of, -N/2 to N/2. */
  aheadOfFirst(position: number): number {
    const { positions, numberShift, isReversed } = this;
    const first = isReversed ? numberShift + 1 : numberShift;
    const ahead = (position - first + 2 * positions) % positions;
    return ahead > positions / 2 ? ahead - positions : ahead;
  }

  /** What was learnt holds for the teeth that come now. */
  get isKnown(): boolean {
    return this.started && !this.isStale;
  }

  /** On a wheel with a gap the numbers hold on; otherwise what was learnt is of other teeth than those that come now. */
  start(reversed: boolean): void {
    if (this.isStale || reversed !== this.isReversed) this.forget();
    this.isReversed = reversed;
  }

  lose(): void {
    this.started = false;
    this.beganS = this.beganBeforeS = NaN;
    this.absence.clear();
    if (this.missing === 0) this.isStale = true;
  }

  place(position: number, spans: number): void {
    const { t, toothSwingV: swingV } = this;
    const count = this.counts[position]! + 1;
    this.counts[position] = count;
    if (!Number.isNaN(swingV)) {
      const old = this.swingV[position]!;
      if (Number.isNaN(old)) {
        this.swingV[position] = swingV;
        this.swingVariance[position] = 0;
      } else {
        const gain = count < recentTurns ? 1 / count : 1 / recentTurns;
        const off = swingV - old;
        this.swingV[position] = old + gain * off;
        this.swingVariance[position] = (1 - gain) * (this.swingVariance[position]! + gain * off * off);
      }
    }
    this.absence.came(position);
    this.seenS[position] = t;
    if (!this.started) {
      this.started = true;
      this.begin(position);
      return;
    }
    if (spans > 1) this.passEmpty(spans);
    this.lastT = t;
    const { positions, startPosition } = this;
    const passed = (this.lastPosition - startPosition + positions) % positions;
    this.lastPosition = position;
    if (passed + spans < positions) {
      this.turnTimes[position] = t;
      return;
    }
    if (passed + spans === positions) this.finishTurn();
    else this.beganS = this.beganBeforeS = NaN;
    this.begin(position);
  }

  snapshot(angleDeg: number | null): WheelFace {
    const { positions, missing, isReversed, isNumbered: numbered } = this;
    const list: WheelFace['positions'] = new Array<WheelFace['positions'][number]>(positions);
    for (let k = 0; k < positions; k++) {
      const i = this.numberOf(k);
      const gone = numbered && i >= positions - missing;
      const hidden = gone || this.absence.inRow[k]! > 0;
      list[i] = {
        angleDeg: (360 * i) / positions,
        spacingErrorDeg: gone ? null : known(isReversed ? -this.spacingDeg[k]! : this.spacingDeg[k]!),
        swingV: hidden ? null : known(this.swingV[k]!),
        missing: gone,
        count: this.counts[k]!,
      };
    }
    return { numbered, positions: list, angleDeg };
  }

  private forget(): void {
    this.isStale = false;
    this.hasIndex = false;
    this.numberShift = 0;
    this.turns = this.learntTurns = 0;
    for (const column of [this.spacingDeg, this.step, this.stepVariance, this.swingV, this.swingVariance])
      column.fill(NaN);
    this.seenS.fill(NaN);
    this.counts.fill(0);
    this.learnt.fill(0);
  }

  private begin(position: number): void {
    this.turnTimes.fill(NaN);
    this.startPosition = this.lastPosition = position;
    this.turnTimes[position] = this.lastT = this.t;
  }

  private passEmpty(spans: number): void {
    const { positions, missing, lastPosition, lastT, t } = this;
    for (let k = 1; k < spans; k++) {
      const position = (lastPosition + k) % positions;
      if (position < positions - missing)
        this.absence.stayedEmpty(position, lastT + (k / spans) * (t - lastT));
    }
  }

  private finishTurn(): void {
    const { turnTimes, timesBefore, startPosition, t, beganS, beganBeforeS } = this;
    const fromS = turnTimes[startPosition]!;
    this.turns++;
    for (const listener of this.listeners) listener.turn(turnTimes, startPosition, t);
    if (!Number.isNaN(beganBeforeS)) this.learn(timesBefore, beganBeforeS, beganS, fromS, t);
    this.beganBeforeS = beganS;
    this.beganS = fromS;
    this.timesBefore = turnTimes;
    this.turnTimes = timesBefore;
  }

  /** The turn with its teeth at `times`, from `fromS` to `toS`; the same tooth passed at `beforeS` and `afterS` too. */
  private learn(times: Float64Array, beforeS: number, fromS: number, toS: number, afterS: number): void {
    const { positions, startPosition, spacingDeg, step, stepVariance, recentStep, learnt } = this;
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
      if (!Number.isNaN(off - last)) {
        const n = learnt[position]! + 1;
        const gain = n < memoryTurns ? 1 / n : 1 / memoryTurns;
        learnt[position] = Math.min(n, memoryTurns);
        const here = off - last;
        const old = n === 1 ? here : step[position]!;
        const change = here - old;
        step[position] = old + gain * change;
        const recent = recentStep[position]!;
        recentStep[position] = n <= recentTurns ? step[position]! : recent + (here - recent) / recentTurns;
        stepVariance[position] =
          n === 1 ? 0 : (1 - gain) * (stepVariance[position]! + gain * change * change);
      }
      last = off;
      if (k === positions || Number.isNaN(off)) continue;
      times[position] = off;
      sum += off;
      seen++;
    }
    const gain = Math.max(1 / memoryTurns, 1 / (this.learntTurns + 1));
    const mean = sum / seen;
    for (let k = 0; k < positions; k++) {
      const errorDeg = (360 * (times[k]! - mean)) / positions;
      if (Number.isNaN(errorDeg)) continue;
      const old = spacingDeg[k]!;
      spacingDeg[k] = Number.isNaN(old) ? errorDeg : old + gain * (errorDeg - old);
    }
    this.learntTurns++;
  }
}

/** Position 0 is the first tooth in either sense; on a wheel with a gap it follows that. */
export function mirrored(position: number, positions: number, missing: number): number {
  return (2 * positions - missing - (missing > 0 ? 1 : 0) - position) % positions;
}

function known(value: number): number | null {
  return Number.isNaN(value) ? null : value;
}
