/**
 * The live path's learning of pitches: whole turns of the first channel teach where each tooth stands, and what was learnt
 * is taken out of the speed between single teeth.
 *
 * The shaft's angle is theta = a t + b t^2 through three passes of the SAME tooth (a turn ago, and the begin and end of
 * this one), which the wheel's own unevenness cannot bend: exact for an even acceleration. Turns in which acceleration
 * changes the speed by 0.1 % or more from tooth to tooth teach nothing.
 * Forward and reverse are learnt apart: teeth rise on other flanks.
 */
import { turnsNeeded } from '@/signal/pitch-learner';
import { PitchMemory } from '@/signal/pitch-memory';
import { slowUnevenness } from '@/signal/pitch-orders';
import type { SpeedMeter } from '@/signal/speed-meter';
import type { TurnListener, WheelFaceMeter } from '@/signal/wheel-face-meter';
import type { WheelTracker } from '@/signal/wheel-tracker';

const mostSpeedChange = 0.001;
/** Pitches off by so much, slowly over the turn, are presumed until some turns were seen: a wheel that runs out a little. */
const presumedSlow = 0.003;

export type PitchStatus = {
  /** none: a wheel of one tooth, or of too many; learning; in-use: taken out of the speed. */
  state: 'none' | 'learning' | 'in-use';
  /** Steady turns learnt in this direction. */
  turns: number;
  turnsNeeded: number;
  /** Rms by which teeth are off their places, share of the pitch; null: not known. */
  uneven: number | null;
  /** Standard error of one of these, share of the pitch. */
  uncertain: number | null;
};

export class Pitch implements TurnListener {
  private readonly meter: SpeedMeter;
  private readonly tracker: WheelTracker;
  private readonly forward: PitchMemory;
  private readonly reverse: PitchMemory;
  private readonly offsets: Float64Array;
  private readonly isOff: boolean;
  private memory: PitchMemory;
  private trackedCount = 0;
  /** Position of the meter's newest tooth; -1: not known. */
  private at = -1;
  private marked: Float64Array | null = null;
  private lastStart = -1;
  private lastStartS = NaN;
  private lastEndS = NaN;

  constructor(meter: SpeedMeter, tracker: WheelTracker, face: WheelFaceMeter | null) {
    const { positions, missing } = tracker;
    this.meter = meter;
    this.tracker = tracker;
    this.isOff = face === null || positions - missing < 2;
    const size = this.isOff ? 0 : positions;
    this.forward = new PitchMemory(size, missing > 0);
    this.reverse = new PitchMemory(size, missing > 0);
    this.memory = this.forward;
    this.offsets = new Float64Array(size);
    if (this.isOff) return;
    face?.listeners.push(this);
    meter.error.hidden = this.hidden();
  }

  get status(): PitchStatus {
    const { memory } = this;
    const { best } = memory;
    return {
      state: this.isOff ? 'none' : memory.table ? 'in-use' : 'learning',
      turns: memory.turns,
      turnsNeeded,
      uneven: best ? best.rms() : null,
      uncertain: best ? Math.sqrt(best.error) : null,
    };
  }

  /** Stop, gap or reversal. */
  lose(): void {
    this.at = -1;
    this.lastStartS = this.lastEndS = NaN;
    this.forward.renumber();
    this.reverse.renumber();
  }

  /** Before a tooth is added: where the one before it stands, now that the tracker has taken that. */
  follow(reversed: boolean): void {
    const { tracker } = this;
    if (this.isOff) return;
    this.memory = reversed ? this.reverse : this.forward;
    if (tracker.count < this.trackedCount) this.lose();
    this.trackedCount = tracker.count;
    if (tracker.waiting === 0) this.at = tracker.isLocked ? tracker.position : -1;
  }

  /** A tooth is to be added at `place`, `spans` positions after the one before. */
  mark(place: number, spans: number): void {
    const { meter, memory, offsets } = this;
    if (this.isOff) return;
    if (this.at >= 0) this.at = (this.at + spans) % offsets.length;
    const table = this.at >= 0 ? memory.table : null;
    if (table !== this.marked) this.remark(table, place - this.at);
    meter.offset = table ? table[this.at]! : 0;
  }

  /** A tooth is to be added that no interval leads to. */
  begin(): void {
    this.at = -1;
    this.mark(0, 0);
  }

  private remark(table: Float64Array | null, origin: number): void {
    const { best } = this.memory;
    const variance = !best ? NaN : table ? best.scatter : best.scatter + best.rms() ** 2;
    this.marked = table;
    this.meter.remark(table, origin, variance);
    this.meter.error.hidden = table ? 0 : this.hidden();
  }

  private hidden(): number {
    const { best } = this.memory;
    return best ? slowUnevenness(best.offsets, best.counts) : presumedSlow ** 2;
  }

  turn(times: Float64Array, start: number, endS: number): void {
    const { offsets, memory } = this;
    const n = offsets.length;
    const startS = times[start]!;
    const beforeS = this.lastEndS === startS && this.lastStart === start ? this.lastStartS : NaN;
    this.lastStart = start;
    this.lastStartS = startS;
    this.lastEndS = endS;
    // In turns: 0 at the start of this turn, -1 at that of the turn before, 1 at the end.
    const p = startS - beforeS;
    const q = endS - startS;
    const b = (p - q) / (p * q * (p + q));
    const a = 1 / q - b * q;
    const slowest = Math.min(a, a + 2 * b * q);
    if (!(slowest > 0 && (2 * Math.abs(b)) / (n * slowest * slowest) < mostSpeedChange)) return;
    for (let i = 0; i < n; i++) {
      const k = start + i < n ? start + i : start + i - n;
      const t = times[k]! - startS;
      offsets[k] = n * (a * t + b * t * t) - i;
    }
    memory.take(offsets);
    if (!this.marked) this.meter.error.hidden = this.hidden();
  }
}
