/**
 * Filtered samples of one window of a capture, for what edges alone cannot tell: the last whole window in which the shaft
 * turned undisturbed, else the last in which it turned at all. Windows end at ticks, so that they do not depend on how the
 * capture was read.
 */
import type { MotionNow, SampleTap } from '@/signal/pipeline-types';

/** A window is over with the first tick after so many samples. */
const wantedSamples = 16_384;
const roomSamples = wantedSamples + 8192;
const fewestTeeth = 5;

export type SampleWindow = {
  /** Index of the first sample on the capture's axis. */
  startIndex: number;
  count: number;
  /** Filtered volts of each channel. */
  volts: readonly Float64Array[];
};

/** Holds two windows at most, however long the capture; `finish` gives the better one. */
export class WindowKeeper implements SampleTap {
  private readonly filling: SampleWindow & { volts: Float64Array[] };
  private best: SampleWindow | null = null;
  private bestIsCalm = false;
  private teethBefore = 0;
  private disturbancesBefore = 0;

  constructor(channels: number) {
    const volts = Array.from({ length: channels }, () => new Float64Array(roomSamples));
    this.filling = { startIndex: 0, count: 0, volts };
  }

  chunk(channel: number, v: Float64Array, from: number, count: number, at: number): void {
    const { filling } = this;
    if (channel === 0 && filling.count === 0) filling.startIndex = at;
    const place = at - filling.startIndex;
    if (place + count > roomSamples) return;
    filling.volts[channel]!.set(v.subarray(from, from + count), place);
    if (channel === filling.volts.length - 1) filling.count = place + count;
  }

  /** Samples were lost: a window has no hole. */
  gap(now: MotionNow): void {
    this.begin(now);
  }

  tick(now: MotionNow): void {
    if (this.filling.count >= wantedSamples) this.judge(now);
  }

  /** @returns the window to take; null where the shaft turned in none. */
  finish(now: MotionNow): SampleWindow | null {
    if (!this.best && this.filling.count > 0) this.judge(now);
    return this.best;
  }

  private judge(now: MotionNow): void {
    const { filling } = this;
    const turned = now.teeth - this.teethBefore >= fewestTeeth;
    const calm = turned && now.state === 'running' && now.disturbances === this.disturbancesBefore;
    if (turned && (calm || !this.bestIsCalm)) {
      const { startIndex, count } = filling;
      this.best = { startIndex, count, volts: filling.volts.map((volts) => volts.slice(0, count)) };
      this.bestIsCalm = calm;
    }
    this.begin(now);
  }

  private begin(now: MotionNow): void {
    this.filling.count = 0;
    this.teethBefore = now.teeth;
    this.disturbancesBefore = now.disturbances;
  }
}
