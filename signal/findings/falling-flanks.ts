/**
 * Where the falling flanks of a wheel's teeth stand, learnt at looks from the log of whole turns: the wheel's face learns from
 * rising ones alone. Poles of a ring may be magnetised unevenly in a way that only one kind of flank shows, and which one is
 * the rising one depends on how the sensor is wired.
 */
import type { ToothLog } from '@/signal/tooth-log';
import { readableFrom } from '@/signal/tooth-log';
import type { TurnListener, WheelFaceMeter } from '@/signal/wheel-face-meter';

/** Turns that are remembered until the next look, and that means run over. */
const mostTurns = 16;
const memoryTurns = 8;

export class FallingFlanks implements TurnListener {
  /** Turns that were learnt from. */
  turns = 0;
  /** From the fall before to this one, above a whole pitch, as a share of it: mean, and variance of single turns. */
  readonly step: Float64Array;
  readonly stepVariance: Float64Array;
  private readonly face: WheelFaceMeter;
  private readonly log: ToothLog;
  /** From rise to fall, in pitches: mean. */
  private readonly width: Float64Array;
  private readonly widthVariance: Float64Array;
  private readonly fromS = new Float64Array(mostTurns);
  private readonly toS = new Float64Array(mostTurns);
  private readonly start = new Int32Array(mostTurns);
  private noted = 0;
  private spacingTurns = 0;

  constructor(face: WheelFaceMeter, log: ToothLog) {
    const column = (): Float64Array => new Float64Array(face.positions).fill(NaN);
    this.face = face;
    this.log = log;
    this.step = column();
    this.stepVariance = column();
    this.width = column();
    this.widthVariance = column();
    face.listeners.push(this);
  }

  turn(times: Float64Array, start: number, endS: number): void {
    const i = this.noted % mostTurns;
    this.fromS[i] = times[start]!;
    this.toS[i] = endS;
    this.start[i] = start;
    this.noted++;
  }

  /** Takes over the turns since the last look, as far as the log still has them. */
  look(): void {
    const { face, noted, step, stepVariance, width, widthVariance } = this;
    const { spacing, positions } = face;
    if (spacing.turns < this.spacingTurns || spacing.turns === 0) {
      this.turns = 0;
      width.fill(NaN);
    }
    this.spacingTurns = spacing.turns;
    for (let i = Math.max(0, noted - mostTurns); i < noted; i++) this.learn(i % mostTurns);
    this.noted = 0;
    for (let k = 0; k < positions; k++) {
      const before = k === 0 ? positions - 1 : k - 1;
      step[k] = spacing.step[k]! + width[k]! - width[before]!;
      // The widths carry the scatter of the rises as well: what is known of the falls is at least so good.
      stepVariance[k] = spacing.stepVariance[k]! + widthVariance[k]! + widthVariance[before]!;
    }
  }

  private learn(i: number): void {
    const { positions, missing } = this.face;
    const first = this.toothAt(this.fromS[i]!);
    const teeth = positions - missing;
    // A pulse too many, or one that did not come: no number of the log is sure then.
    if (first < 0 || this.toothAt(this.toS[i]!) !== first + teeth) return;
    let position = this.start[i]!;
    for (let n = first; n < first + teeth; n++) {
      // The last one before a gap may last as long as that.
      if (missing === 0 || position < teeth - 1) this.note(position, n);
      position++;
      if (position >= teeth) position = 0;
    }
    this.turns++;
  }

  /** The tooth `n` of the log stands at `position`. */
  private note(position: number, n: number): void {
    const { width, widthVariance, face, log } = this;
    const { riseS, fallS, mask } = log;
    const next = position + 1 < face.positions ? position + 1 : 0;
    const pitches = 1 + face.spacing.step[next]!;
    const riseAtS = riseS[n & mask]!;
    const here = (pitches * (fallS[n & mask]! - riseAtS)) / (riseS[(n + 1) & mask]! - riseAtS);
    if (!(here > 0 && here < pitches)) return;
    const old = width[position]!;
    if (Number.isNaN(old)) {
      width[position] = here;
      widthVariance[position] = 0;
      return;
    }
    const gain = Math.max(1 / memoryTurns, 1 / (this.turns + 1));
    const change = here - old;
    width[position] = old + gain * change;
    widthVariance[position] = (1 - gain) * (widthVariance[position]! + gain * change * change);
  }

  /** Number of the tooth that rose at `t`, s; -1: it is not in the log any more. */
  private toothAt(t: number): number {
    const { riseS, mask, count } = this.log;
    let low = readableFrom(this.log, 0);
    let high = count - 1;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (riseS[middle & mask]! < t - 1e-9) low = middle + 1;
      else high = middle;
    }
    return low < count && Math.abs(riseS[low & mask]! - t) < 1e-9 ? low : -1;
  }
}
