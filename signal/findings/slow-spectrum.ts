/**
 * Spectra of the slow rings of all channels over the last second, for rules about hum and ripple: taken once a second, or
 * twice while something is suspected. Where that second cannot tell a tone from what lies beside it, a rule asks for the
 * last two seconds of a channel.
 */
import type { RuleContext } from '@/signal/findings/rule';
import { SlowTransform } from '@/signal/findings/slow-transform';
import { SlowWheel } from '@/signal/findings/slow-wheel';

export type Spectrum = {
  /** Index of the channel in the context's paths. */
  index: number;
  /** Of bins 0 to half the size; V, amplitudes. */
  re: Float64Array;
  im: Float64Array;
  /** What the channel's teeth put into it. */
  wheel: SlowWheel;
};

const mostSamples = 1024;
const fewestSamples = 128;
const windowS = 1.25;

export class SlowSpectra {
  /** Channels that carry teeth. */
  readonly list: readonly Spectrum[];
  /** Distance of two bins, Hz; NaN where the stream is too slow for any of this. */
  readonly binHz: number;
  /** Half the samples a second: what lies above folds down. */
  readonly nyquistHz: number;
  /** Begin and end of the window. */
  fromS = NaN;
  toS = NaN;
  /** Set by a rule that suspects something: the next look comes sooner. */
  suspected = false;
  private readonly context: RuleContext;
  private readonly size: number;
  private readonly transform: SlowTransform | null;
  private lookedAt = 0;
  private askedS = NaN;
  private isNew = false;
  /** Twice as long, made when first asked for, and the look that they were last read at. */
  private longTransform: SlowTransform | null = null;
  private readonly longer: (Spectrum | null)[];
  private readonly longerAt: number[];

  constructor(context: RuleContext) {
    const { paths } = context;
    this.context = context;
    const { rateHz } = paths[0]!.slow;
    const size = Math.min(mostSamples, 2 ** Math.floor(Math.log2(windowS * rateHz)));
    const enough = size >= fewestSamples;
    this.size = size;
    this.binHz = enough ? rateHz / size : NaN;
    this.nyquistHz = rateHz / 2;
    this.transform = enough ? new SlowTransform(size) : null;
    const judged = enough ? paths.filter(({ channel }) => !['aux', 'Z'].includes(channel.role)) : [];
    this.list = judged.map((path) => this.emptyOf(paths.indexOf(path), size));
    this.longer = this.list.map(() => null);
    this.longerAt = this.list.map(() => NaN);
  }

  /** To be asked at every tick, by as many rules as want. @returns true where there are new spectra. */
  look(nowS: number): boolean {
    if (nowS !== this.askedS) {
      this.askedS = nowS;
      this.isNew = this.lookAgain();
    }
    return this.isNew;
  }

  private lookAgain(): boolean {
    const { list, size, suspected, transform } = this;
    if (!transform || list.length === 0) return false;
    const { count, unbrokenFrom, rateHz, stride } = this.context.paths[list[0]!.index]!.slow;
    const since = count - this.lookedAt;
    if (since < (suspected ? rateHz / 2 : rateHz) - 1 || count - unbrokenFrom < size) return false;
    this.lookedAt = count;
    this.suspected = false;
    const sampleS = stride / this.context.rateHz;
    this.toS = this.askedS;
    this.fromS = this.toS - size * sampleS;
    for (const spectrum of list) {
      this.read(transform, spectrum);
      spectrum.wheel.read(this.fromS);
      spectrum.wheel.learnLines((hz) => this.sizeNear(spectrum, hz));
    }
    return true;
  }

  /** The same channel over twice the time up to the last look; null where so much is not there. */
  longerOf(spectrum: Spectrum): Spectrum | null {
    const i = this.list.indexOf(spectrum);
    const size = 2 * this.size;
    const { count, unbrokenFrom, v } = this.context.paths[spectrum.index]!.slow;
    if (count - unbrokenFrom < size || size > v.length) return null;
    const longer = (this.longer[i] ??= this.emptyOf(spectrum.index, size));
    if (this.longerAt[i] === this.lookedAt) return longer;
    this.longerAt[i] = this.lookedAt;
    this.read((this.longTransform ??= new SlowTransform(size)), longer);
    longer.wheel.readLonger(2 * this.fromS - this.toS, spectrum.wheel);
    return longer;
  }

  /** Of what stands at `hz`, V; 0 outside the spectrum. */
  sizeNear(spectrum: Spectrum, hz: number): number {
    const bin = Math.round(hz / spectrum.wheel.binHz);
    if (!(bin > 1 && bin < spectrum.re.length - 2)) return 0;
    const { re, im } = spectrum;
    let most = 0;
    for (let k = bin - 1; k <= bin + 1; k++) most = Math.max(most, re[k]! * re[k]! + im[k]! * im[k]!);
    return Math.sqrt(most);
  }

  private emptyOf(index: number, size: number): Spectrum {
    const { context, nyquistHz } = this;
    const path = context.paths[index]!;
    return {
      index,
      re: new Float64Array(size / 2 + 1),
      im: new Float64Array(size / 2 + 1),
      wheel: new SlowWheel(context, path, (2 * nyquistHz) / size, nyquistHz),
    };
  }

  private read(transform: SlowTransform, { index, re, im }: Spectrum): void {
    const { v, count } = this.context.paths[index]!.slow;
    transform.read(v, count - transform.size, re, im);
  }
}

export function sizeAt({ re, im }: Spectrum, bin: number): number {
  const a = re[bin]!;
  const b = im[bin]!;
  return Math.sqrt(a * a + b * b);
}
