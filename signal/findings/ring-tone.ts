/**
 * The strongest tone of a slow ring, held against what lies around it, so that it shows far below the noise of single
 * samples. Tones above half the ring's rate fold down: what it really is, its user has to know.
 */
import { SlowTransform } from '@/signal/findings/slow-transform';
import type { SlowRing } from '@/signal/slow-ring';

const mostSamples = 1024;
const fewestSamples = 128;
const windowS = 1.25;
const lowestBin = 4;
/** Power of the peak over the median of the bins around it: noise comes so far once in 10^9 looks. */
const prominent = 40;
const nearest = 8;
const furthest = 40;
/** A speed that sways spreads the tone to so many bins on either side. */
const spread = 6;
/** Of the squares of a Hann window's bins over that of a tone. */
const hannPower = 1.5;

export class RingTone {
  /** Hz, folded; and peak to peak, V; NaN: no tone. */
  hz = NaN;
  swingV = NaN;
  /** What two bins differ by, Hz; NaN where the stream is too slow. */
  readonly binHz: number;
  private readonly size: number;
  private transform: SlowTransform | null = null;
  private re = new Float64Array(0);
  private im = new Float64Array(0);
  private readonly around = new Float64Array(2 * (furthest - nearest + 1));

  /** @param ringHz kept samples a second. */
  constructor(ringHz: number) {
    const size = Math.min(mostSamples, 2 ** Math.floor(Math.log2(windowS * ringHz)));
    this.size = size >= fewestSamples ? size : 0;
    this.binHz = this.size > 0 ? ringHz / size : NaN;
  }

  /** @returns false where the ring does not hold enough yet. */
  look({ v, count, unbrokenFrom }: SlowRing): boolean {
    const { size } = this;
    this.hz = this.swingV = NaN;
    if (size === 0 || count - unbrokenFrom < size) return false;
    if (!this.transform) {
      this.transform = new SlowTransform(size);
      this.re = new Float64Array(size / 2 + 1);
      this.im = new Float64Array(size / 2 + 1);
    }
    const { re, im } = this;
    this.transform.read(v, count - size, re, im);
    const end = size / 2 - 2;
    let peak = lowestBin;
    for (let k = lowestBin; k < end; k++) if (this.powerAt(k) > this.powerAt(peak)) peak = k;
    const floor = this.floorBeside(peak, end);
    if (!(this.powerAt(peak) > prominent * floor) || peak === lowestBin) return true;
    let power = 0;
    let moment = 0;
    for (let k = Math.max(1, peak - spread); k <= Math.min(end, peak + spread); k++) {
      const own = Math.max(0, this.powerAt(k) - floor);
      power += own;
      moment += own * k;
    }
    this.hz = (moment / power) * this.binHz;
    this.swingV = 2 * Math.sqrt(power / hannPower);
    return true;
  }

  private powerAt(bin: number): number {
    return this.re[bin]! ** 2 + this.im[bin]! ** 2;
  }

  private floorBeside(peak: number, end: number): number {
    const { around } = this;
    let count = 0;
    for (let far = nearest; far <= furthest; far++) {
      if (peak - far >= lowestBin) around[count++] = this.powerAt(peak - far);
      if (peak + far < end) around[count++] = this.powerAt(peak + far);
    }
    const sorted = around.subarray(0, count).sort();
    return sorted[count >> 1]!;
  }
}
