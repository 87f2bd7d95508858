/**
 * The line of least squares through instant over place, over the teeth of a window that slides: its slope is the mean time
 * for one position. Running sums about an origin near the window.
 */
import type { SpeedRing } from '@/signal/speed-ring';

/** Running sums drift; they are taken anew after so many teeth. */
const teethToRefit = 256;

export class WindowLine {
  /** First entry of the window. */
  from = 0;
  /** Time for one position, s, and the sum of squares of places about their mean. */
  perPositionS = NaN;
  spread = NaN;
  private readonly ring: SpeedRing;
  private readonly windowS: number;
  private sinceRefit = 0;
  private originS = 0;
  private originMark = 0;
  private sumT = 0;
  private sumP = 0;
  private sumPP = 0;
  private sumTP = 0;

  constructor(ring: SpeedRing, windowS: number) {
    this.ring = ring;
    this.windowS = windowS;
  }

  /** The ring was emptied, or what it holds has changed. */
  refit(): void {
    const { ring } = this;
    if (this.from < ring.first) this.from = ring.first;
    this.sinceRefit = 0;
    this.sumT = this.sumP = this.sumPP = this.sumTP = 0;
    if (ring.count === 0) return;
    this.originS = ring.times[this.from & ring.mask]!;
    this.originMark = ring.marks[this.from & ring.mask]!;
    for (let k = this.from; k < ring.next; k++) this.account(k, 1);
  }

  /** Takes the ring's newest entry and drops what is older than the window; two teeth are kept at least. */
  slide(): void {
    const { ring } = this;
    const { times, mask } = ring;
    const last = ring.next - 1;
    const beginS = times[last & mask]! - this.windowS;
    if (++this.sinceRefit >= teethToRefit || ring.count === 1) this.refit();
    else this.account(last, 1);
    while (this.from < last - 1 && times[this.from & mask]! < beginS) this.account(this.from++, -1);
  }

  solve(): void {
    const n = this.ring.next - this.from;
    this.spread = this.sumPP - (this.sumP * this.sumP) / n;
    this.perPositionS = (this.sumTP - (this.sumT * this.sumP) / n) / this.spread;
  }

  private account(k: number, sign: 1 | -1): void {
    const { times, marks, mask } = this.ring;
    const x = times[k & mask]! - this.originS;
    const p = marks[k & mask]! - this.originMark;
    this.sumT += sign * x;
    this.sumP += sign * p;
    this.sumPP += sign * p * p;
    this.sumTP += sign * x * p;
  }
}
