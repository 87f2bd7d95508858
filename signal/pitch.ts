/**
 * The live path's learning of pitches: whole turns of the first channel teach where each tooth stands, and what was learnt
 * is taken out of the speed between single teeth.
 *
 * The shaft's angle is the cubic through four passes of the SAME tooth, which the wheel's own unevenness cannot bend: the
 * middle turn of the three is judged. It is exact for an acceleration that itself changes evenly, so that turns need not
 * be steady to 0.1 % from tooth to tooth, as a straight line would want them: an even ramp teaches as well. Left out are
 * turns whose speed changes by more than a tenth, or whose change itself changes by more than 2 %.
 * Forward and reverse are learnt apart: teeth rise on other flanks.
 */
import { turnsNeeded } from '@/signal/pitch-learner';
import { PitchMemory } from '@/signal/pitch-memory';
import { slowUnevenness } from '@/signal/pitch-orders';
import type { SpeedMeter } from '@/signal/speed-meter';
import type { TurnListener, WheelFaceMeter } from '@/signal/wheel-face-meter';
import type { WheelTracker } from '@/signal/wheel-tracker';

const mostChange = 0.1;
const mostFits = 0.02;
/** What is in use and fits is held against one turn of so many and one. */
const turnsSkipped = 3;
/** Pitches off by so much, slowly over the turn, are presumed until some turns were seen: a wheel that runs out a little. */
const presumedSlow = 0.002;

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
  /** Instants of the last turn's teeth where they are to be judged, where it began, and when it, the turn before it and the next one began, s. */
  private readonly times: Float64Array;
  private hasTimes = false;
  private skipped = 0;
  private start = -1;
  private beforeS = NaN;
  private startS = NaN;
  private endS = NaN;

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
    this.times = new Float64Array(size);
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
    this.beforeS = this.startS = this.endS = NaN;
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
    if (this.at >= 0) {
      this.at += spans;
      if (this.at >= offsets.length) this.at %= offsets.length;
    }
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
    const startS = times[start]!;
    const follows = this.endS === startS && this.start === start;
    const { memory } = this;
    if (this.hasTimes && follows && this.measure(endS)) {
      memory.take(this.offsets);
      if (!this.marked) this.meter.error.hidden = this.hidden();
      this.skipped = 0;
    } else {
      this.skipped++;
    }
    this.hasTimes = !memory.fits || this.skipped >= turnsSkipped;
    if (this.hasTimes) this.times.set(times);
    this.start = start;
    this.beforeS = follows ? this.startS : NaN;
    this.startS = startS;
    this.endS = endS;
  }

  /** Offsets of the last turn, now that the one after it has ended too. */
  private measure(afterS: number): boolean {
    const { times, offsets, start, startS } = this;
    const n = offsets.length;
    const turnS = this.endS - startS;
    const before = (this.beforeS - startS) / turnS;
    const after = (afterS - startS) / turnS;
    const slower = -before - 1;
    const faster = after - 2;
    if (!(Math.abs(slower) < mostChange && Math.abs(faster) < mostChange)) return false;
    if (Math.abs(slower + faster) > mostFits) return false;
    // Newton's divided differences of -1, 0, 1, 2 turns over `before`, 0, 1, `after`.
    const second = 2 / (1 - before);
    const third = (second - 1) / before;
    const fourth = ((3 / (after - before) - second) / (after - 1) - third) / after;
    for (let i = 0; i < n; i++) {
      const k = start + i < n ? start + i : start + i - n;
      const u = (times[k]! - startS) / turnS;
      offsets[k] = n * (u + u * (u - 1) * (third + fourth * (u - before))) - i;
    }
    return true;
  }
}
