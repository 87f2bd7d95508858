/**
 * What the wheel face draws: spacing and strength of every tooth, averaged over turns, and which places stayed empty.
 *
 * Spacing of a tooth at the share x of the turn's time, in a turn during which the speed changed by the share a (from
 * this and the last turn's durations): its angle is 360 (x - a x (1 - x) / 2); the nominal angle taken off, the mean of
 * the turn taken off. Turns whose duration changed by more than 5 % teach nothing.
 */
import type { WheelFace } from '@/signal/model';

/** Wheels with more positions are not drawn, and no single tooth of theirs is judged. */
export const mostPositions = 4096;

export interface TurnListener {
  /**
   * A whole turn is over.
   * @param times instant of the tooth at each position, s; NaN where none came. @param start position that the turn began
   * with. @param endS instant of that position's tooth a turn later, s. The array is used again for the next turn.
   */
  turn(times: Float64Array, start: number, endS: number): void;
}

export class WheelFaceMeter {
  readonly listeners: TurnListener[] = [];
  /** Turns in a row in which nothing came where the tooth should be. */
  readonly missedInRow: Uint16Array;
  readonly lastSeenS: Float64Array;
  /** Instant of the tooth that `place` is to take, s, and its peak to peak, V (NaN: not known). */
  t = NaN;
  toothSwingV = NaN;
  private readonly positions: number;
  private readonly missing: number;
  private readonly spacingDeg: Float64Array;
  private readonly swingV: Float64Array;
  private readonly counts: Float64Array;
  private readonly turnTimes: Float64Array;
  private started = false;
  private startPosition = 0;
  private lastPosition = 0;
  private lastTurnS = NaN;

  constructor(positions: number, missing: number) {
    this.positions = positions;
    this.missing = missing;
    this.spacingDeg = new Float64Array(positions).fill(NaN);
    this.swingV = new Float64Array(positions).fill(NaN);
    this.counts = new Float64Array(positions);
    this.missedInRow = new Uint16Array(positions);
    this.lastSeenS = new Float64Array(positions).fill(NaN);
    this.turnTimes = new Float64Array(positions).fill(NaN);
  }

  /** Position unknown from here on (stop, gap, reversal, out of sync). */
  lose(forget: boolean): void {
    this.started = false;
    this.lastTurnS = NaN;
    this.missedInRow.fill(0);
    if (!forget) return;
    this.spacingDeg.fill(NaN);
    this.swingV.fill(NaN);
    this.counts.fill(0);
  }

  /** Takes a tooth at `position`, `spans` positions after the one before. */
  place(position: number, spans: number): void {
    const { positions, t, toothSwingV: swingV } = this;
    this.counts[position] = this.counts[position]! + 1;
    if (!Number.isNaN(swingV)) {
      const old = this.swingV[position]!;
      this.swingV[position] = Number.isNaN(old) ? swingV : old + (swingV - old) / 4;
    }
    if (!this.started) {
      this.begin(position);
      return;
    }
    for (let k = 1; k < spans; k++) this.miss((this.lastPosition + k) % positions);
    const passedStart = (this.lastPosition - this.startPosition + positions) % positions;
    if (passedStart + spans >= positions) {
      if (position === this.startPosition) this.finishTurn();
      this.begin(position);
    } else {
      this.turnTimes[position] = t;
      this.lastPosition = position;
    }
    this.missedInRow[position] = 0;
    this.lastSeenS[position] = t;
  }

  /** @param mirrored positions were counted backwards (reverse). */
  snapshot(numbered: boolean, mirrored: boolean, angleDeg: number | null): WheelFace {
    const { positions, missing } = this;
    const list: WheelFace['positions'] = [];
    for (let i = 0; i < positions; i++) {
      const k = mirrored ? (positions - i) % positions : i;
      const gone = numbered && k >= positions - missing;
      list.push({
        angleDeg: (360 * i) / positions,
        spacingErrorDeg: gone ? null : known(mirrored ? -this.spacingDeg[k]! : this.spacingDeg[k]!),
        swingV: gone ? null : known(this.swingV[k]!),
        missing: gone,
        count: this.counts[k]!,
      });
    }
    return { numbered, positions: list, angleDeg };
  }

  private begin(position: number): void {
    this.turnTimes.fill(NaN);
    this.started = true;
    this.startPosition = position;
    this.lastPosition = position;
    this.turnTimes[position] = this.t;
  }

  private miss(position: number): void {
    if (this.missing > 0 && position >= this.positions - this.missing) return;
    this.missedInRow[position] = Math.min(65_535, this.missedInRow[position]! + 1);
    this.lastSeenS[position] = this.t;
  }

  private finishTurn(): void {
    const { positions, startPosition, turnTimes, t } = this;
    for (const listener of this.listeners) listener.turn(turnTimes, startPosition, t);
    const t0 = turnTimes[startPosition]!;
    const turnS = t - t0;
    const before = this.lastTurnS;
    this.lastTurnS = turnS;
    if (Number.isNaN(before) || Math.abs(before / turnS - 1) > 0.05) return;
    const change = (before - turnS) / turnS;
    let sum = 0;
    let seen = 0;
    for (let k = 0; k < positions; k++) {
      const error = this.errorDeg(k, t0, turnS, change);
      if (Number.isNaN(error)) continue;
      sum += error;
      seen++;
    }
    const mean = sum / seen;
    for (let k = 0; k < positions; k++) {
      const error = this.errorDeg(k, t0, turnS, change) - mean;
      if (Number.isNaN(error)) continue;
      const position = (startPosition + k) % positions;
      const old = this.spacingDeg[position]!;
      this.spacingDeg[position] = Number.isNaN(old) ? error : old + (error - old) / 8;
    }
  }

  private errorDeg(k: number, t0: number, turnS: number, change: number): number {
    const x = (this.turnTimes[(this.startPosition + k) % this.positions]! - t0) / turnS;
    return 360 * (x - (change * x * (1 - x)) / 2 - k / this.positions);
  }
}

function known(value: number): number | null {
  return Number.isNaN(value) ? null : value;
}
