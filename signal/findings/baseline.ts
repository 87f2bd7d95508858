/**
 * What was usual for a channel since its stream began, for each direction of the shaft: the mean of the first looks, kept
 * from then on. It does not follow: a drift over hours is a drift.
 */
import type { Direction } from '@/signal/model';

/** Half octaves of tooth frequency, from 2^-10 Hz on. */
const speeds = 64;
const lowest = 20;
const step = 2 ** 0.5;

export class Baseline {
  private readonly means: Float64Array;
  private readonly looks: Uint8Array;
  private readonly needed: number;
  private readonly bySpeed: boolean;

  /**
   * @param needed looks before it is known.
   * @param bySpeed one for each half octave of speed: for what depends on speed by nature.
   */
  constructor(needed: number, bySpeed: boolean) {
    const places = 2 * (bySpeed ? speeds : 1);
    this.needed = needed;
    this.bySpeed = bySpeed;
    this.means = new Float64Array(places);
    this.looks = new Uint8Array(places);
  }

  /** NaN where it is not known (yet), or where the speed is not. */
  usual(direction: Direction, toothHz: number): number {
    if (!(toothHz > 0)) return NaN;
    const place = this.place(direction, toothHz);
    return this.looks[place]! < this.needed ? NaN : this.means[place]!;
  }

  /** What is not known in this direction may be known in the other one. NaN where it is not known at all. */
  usualEither(direction: Direction, toothHz: number): number {
    const own = this.usual(direction, toothHz);
    return Number.isNaN(own) ? this.usual(direction === 'reverse' ? 'forward' : 'reverse', toothHz) : own;
  }

  /** One look more, while it is not known; what is not a number is left out. */
  learn(direction: Direction, toothHz: number, value: number): void {
    const place = this.place(direction, toothHz);
    const looks = this.looks[place]!;
    if (looks >= this.needed || Number.isNaN(value)) return;
    this.means[place] = (this.means[place]! * looks + value) / (looks + 1);
    this.looks[place] = looks + 1;
  }

  /** What was learnt was something else. */
  forget(): void {
    this.looks.fill(0);
  }

  /** The next slower or faster half octave, where this one is not known. */
  usualBeside(direction: Direction, toothHz: number): number {
    const slower = this.usual(direction, toothHz / step);
    return Number.isNaN(slower) ? this.usual(direction, toothHz * step) : slower;
  }

  /** The nearest speed in this direction of which it is known; NaN: none. */
  nearestHz(direction: Direction, toothHz: number): number {
    for (let far = 0; far < speeds; far++) {
      for (const hz of [toothHz * step ** far, toothHz / step ** far])
        if (!Number.isNaN(this.usual(direction, hz))) return hz;
    }
    return NaN;
  }

  /** A shaft of which no direction is known has one baseline. */
  private place(direction: Direction, toothHz: number): number {
    const base = direction === 'reverse' ? 1 : 0;
    if (!this.bySpeed) return base;
    const half = Math.floor(2 * Math.log2(toothHz)) + lowest;
    return 2 * Math.min(speeds - 1, Math.max(0, half)) + base;
  }
}
