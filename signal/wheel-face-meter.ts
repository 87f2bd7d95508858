/**
 * What the wheel face draws and rules of findings judge: spacing and strength of every tooth over turns, mean and spread,
 * and which places stayed empty.
 *
 * Positions are counted the way in which the wheel turned when they were learnt; `numberOf` says where that is on the wheel.
 */
import type { WheelFace } from '@/signal/model';
import { WheelAbsence } from '@/signal/wheel-absence';
import type { WheelSeat } from '@/signal/wheel-count';
import { recentTurns, WheelSpacing } from '@/signal/wheel-spacing';

/** Wheels with more positions are not drawn, and no single tooth of theirs is judged. */
export const mostPositions = 4096;

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
  /** Whole turns since there was anything to be forgotten. */
  turns = 0;
  readonly spacing: WheelSpacing;
  /** Peak to peak, V. */
  readonly swingV: Float64Array;
  readonly swingVariance: Float64Array;
  readonly counts: Float64Array;
  /** Last pass, s. */
  readonly seenS: Float64Array;
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
    this.spacing = new WheelSpacing(positions);
    this.swingV = column();
    this.swingVariance = column();
    this.counts = new Float64Array(positions);
    this.seenS = column();
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
    const { spacingDeg } = this.spacing;
    const list: WheelFace['positions'] = new Array<WheelFace['positions'][number]>(positions);
    for (let k = 0; k < positions; k++) {
      const i = this.numberOf(k);
      const gone = numbered && i >= positions - missing;
      const hidden = gone || this.absence.inRow[k]! > 0;
      list[i] = {
        angleDeg: (360 * i) / positions,
        spacingErrorDeg: gone ? null : known(isReversed ? -spacingDeg[k]! : spacingDeg[k]!),
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
    this.turns = 0;
    this.spacing.forget();
    this.swingV.fill(NaN);
    this.swingVariance.fill(NaN);
    this.seenS.fill(NaN);
    this.counts.fill(0);
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
    if (!Number.isNaN(beganBeforeS))
      this.spacing.learn(timesBefore, startPosition, beganBeforeS, beganS, fromS, t);
    this.beganBeforeS = beganS;
    this.beganS = fromS;
    this.timesBefore = turnTimes;
    this.turnTimes = timesBefore;
  }
}

/** Position 0 is the first tooth in either sense; on a wheel with a gap it follows that. */
export function mirrored(position: number, positions: number, missing: number): number {
  return (2 * positions - missing - (missing > 0 ? 1 : 0) - position) % positions;
}

function known(value: number): number | null {
  return Number.isNaN(value) ? null : value;
}
