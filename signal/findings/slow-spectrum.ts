/**
 * Spectra of the slow rings of all channels over the last second, for rules about hum and ripple: taken once a second, or
 * twice while something is suspected.
 *
 * Hann window, scaled so that a tone's amplitude is its bin's size. Two channels go through one complex transform: of
 * z = a + j b, A[k] = (Z[k] + Z*[n - k]) / 2 and B[k] = (Z[k] - Z*[n - k]) / 2j.
 * Sources: F. J. Harris, Proc. IEEE 66 (1978) 51-83 for the window; the textbook transform of radix 2.
 */
import type { RuleContext } from '@/signal/findings/rule';
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
  private readonly re: Float64Array;
  private readonly im: Float64Array;
  private readonly window: Float64Array;
  private readonly cosines: Float64Array;
  private readonly sines: Float64Array;
  private readonly places: Uint16Array;
  private lookedAt = 0;
  private askedS = NaN;
  private isNew = false;

  constructor(context: RuleContext) {
    const { paths } = context;
    this.context = context;
    const { rateHz } = paths[0]!.slow;
    const size = Math.min(mostSamples, 2 ** Math.floor(Math.log2(windowS * rateHz)));
    const enough = size >= fewestSamples;
    this.size = enough ? size : 0;
    this.binHz = enough ? rateHz / size : NaN;
    this.nyquistHz = rateHz / 2;
    const { size: n } = this;
    this.re = new Float64Array(n);
    this.im = new Float64Array(n);
    // The mean of the window is a half; twice that of each side band makes an amplitude: 4 / n.
    this.window = Float64Array.from(
      { length: n },
      (_, i) => ((0.5 - 0.5 * Math.cos((2 * Math.PI * i) / n)) * 4) / n,
    );
    this.cosines = Float64Array.from({ length: n / 2 }, (_, i) => Math.cos((2 * Math.PI * i) / n));
    this.sines = Float64Array.from({ length: n / 2 }, (_, i) => -Math.sin((2 * Math.PI * i) / n));
    this.places = reversed(n);
    const judged = enough ? paths.filter(({ channel }) => !['aux', 'Z'].includes(channel.role)) : [];
    this.list = judged.map((path) => ({
      index: paths.indexOf(path),
      re: new Float64Array(n / 2 + 1),
      im: new Float64Array(n / 2 + 1),
      wheel: new SlowWheel(context, path, this.binHz, this.nyquistHz),
    }));
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
    const { list, size, suspected } = this;
    if (list.length === 0) return false;
    const { count, unbrokenFrom, rateHz, stride } = this.context.paths[list[0]!.index]!.slow;
    const since = count - this.lookedAt;
    if (since < (suspected ? rateHz / 2 : rateHz) - 1 || count - unbrokenFrom < size) return false;
    this.lookedAt = count;
    this.suspected = false;
    const sampleS = stride / this.context.rateHz;
    this.toS = this.askedS;
    this.fromS = this.toS - size * sampleS;
    for (let i = 0; i < list.length; i += 2) this.transformPair(list[i]!, list[i + 1]);
    for (const spectrum of list) {
      spectrum.wheel.read(this.fromS);
      spectrum.wheel.learnLines((hz) => this.sizeNear(spectrum, hz));
    }
    return true;
  }

  /** Of what stands at `hz`, V; 0 outside the spectrum. */
  sizeNear(spectrum: Spectrum, hz: number): number {
    const bin = Math.round(hz / this.binHz);
    if (!(bin > 1 && bin < spectrum.re.length - 2)) return 0;
    return Math.max(sizeAt(spectrum, bin - 1), sizeAt(spectrum, bin), sizeAt(spectrum, bin + 1));
  }

  private transformPair(first: Spectrum, second: Spectrum | undefined): void {
    const { size: n, re, im, window, places } = this;
    const a = this.context.paths[first.index]!.slow;
    const b = second ? this.context.paths[second.index]!.slow : null;
    const from = a.count - n;
    for (let i = 0; i < n; i++) {
      const to = places[i]!;
      const at = from + i;
      re[to] = a.v[at & a.mask]! * window[i]!;
      im[to] = b ? b.v[at & b.mask]! * window[i]! : 0;
    }
    transform(re, im, this.cosines, this.sines);
    const half = n / 2;
    for (let k = 1; k < half; k++) {
      const p = re[k]!;
      const q = im[k]!;
      const r = re[n - k]!;
      const s = im[n - k]!;
      first.re[k] = (p + r) / 2;
      first.im[k] = (q - s) / 2;
      if (!second) continue;
      second.re[k] = (q + s) / 2;
      second.im[k] = (r - p) / 2;
    }
  }
}

export function sizeAt({ re, im }: Spectrum, bin: number): number {
  const a = re[bin]!;
  const b = im[bin]!;
  return Math.sqrt(a * a + b * b);
}

/** Discrete Fourier transform in place, of samples that stand in bit-reversed order; a power of two of them. */
function transform(re: Float64Array, im: Float64Array, cosines: Float64Array, sines: Float64Array): void {
  const n = re.length;
  // The first two rounds turn by quarters only.
  for (let k = 0; k < n; k += 4) {
    const a = re[k]! + re[k + 1]!;
    const b = im[k]! + im[k + 1]!;
    const c = re[k]! - re[k + 1]!;
    const d = im[k]! - im[k + 1]!;
    const e = re[k + 2]! + re[k + 3]!;
    const f = im[k + 2]! + im[k + 3]!;
    const g = re[k + 2]! - re[k + 3]!;
    const h = im[k + 2]! - im[k + 3]!;
    re[k] = a + e;
    im[k] = b + f;
    re[k + 1] = c + h;
    im[k + 1] = d - g;
    re[k + 2] = a - e;
    im[k + 2] = b - f;
    re[k + 3] = c - h;
    im[k + 3] = d + g;
  }
  for (let half = 4, step = n / 8; half < n; half *= 2, step /= 2) {
    for (let block = 0; block < n; block += 2 * half) {
      const end = block + half;
      for (let top = block, at = 0; top < end; top++, at += step) {
        const low = top + half;
        const c = cosines[at]!;
        const s = sines[at]!;
        const p = re[low]!;
        const q = im[low]!;
        const x = p * c - q * s;
        const y = p * s + q * c;
        const u = re[top]!;
        const v = im[top]!;
        re[low] = u - x;
        im[low] = v - y;
        re[top] = u + x;
        im[top] = v + y;
      }
    }
  }
}

/** Where sample i goes: its number's bits in reverse order. */
function reversed(n: number): Uint16Array {
  const places = new Uint16Array(n);
  for (let i = 1; i < n; i++) places[i] = (places[i >> 1]! >> 1) | (i & 1 ? n >> 1 : 0);
  return places;
}
