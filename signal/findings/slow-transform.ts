/**
 * Spectrum of real samples behind a Hann window: two neighbours make one complex sample, so that a transform of half the
 * size does, z[m] = x[2m] + j x[2m + 1]; with Z its transform and h half the size,
 * X[k] = (Z[k] + Z*[h - k]) / 2 - j e^(-j pi k / h) (Z[k] - Z*[h - k]) / 2.
 * Sources: F. J. Harris, Proc. IEEE 66 (1978) 51-83 for the window; the textbook transform of radix 4.
 */
export class SlowTransform {
  readonly size: number;
  private readonly window: Float64Array;
  private readonly re: Float64Array;
  private readonly im: Float64Array;
  /** Of -pi i / h, for three quarters of a turn. */
  private readonly cosines: Float64Array;
  private readonly sines: Float64Array;
  private readonly places: Uint16Array;

  /** @param size a power of two, 16 or more. */
  constructor(size: number) {
    const half = size / 2;
    this.size = size;
    // The mean of the window is a half; twice that of each side band makes an amplitude: 4 / n.
    this.window = Float64Array.from(
      { length: size },
      (_, i) => ((0.5 - 0.5 * Math.cos((2 * Math.PI * i) / size)) * 4) / size,
    );
    this.re = new Float64Array(half);
    this.im = new Float64Array(half);
    const turn = { length: (3 * half) / 2 };
    this.cosines = Float64Array.from(turn, (_, i) => Math.cos((Math.PI * i) / half));
    this.sines = Float64Array.from(turn, (_, i) => -Math.sin((Math.PI * i) / half));
    this.places = reversed(half);
  }

  /**
   * Amplitudes of bins 1 to half the size less one, of the samples `from` on of a ring.
   * @param toRe, toIm of half the size or longer. Same units as the samples.
   */
  read(ring: Float64Array, from: number, toRe: Float64Array, toIm: Float64Array): void {
    const { window, re, im, places, cosines, sines } = this;
    const mask = ring.length - 1;
    const half = re.length;
    for (let m = 0; m < half; m++) {
      const to = places[m]!;
      const at = from + 2 * m;
      re[to] = ring[at & mask]! * window[2 * m]!;
      im[to] = ring[(at + 1) & mask]! * window[2 * m + 1]!;
    }
    transform(re, im, cosines, sines);
    for (let k = 1, l = half - 1; k <= l; k++, l--) {
      const a = (re[k]! + re[l]!) / 2;
      const b = (im[k]! - im[l]!) / 2;
      const c = (im[k]! + im[l]!) / 2;
      const d = (re[l]! - re[k]!) / 2;
      const u = c * cosines[k]! - d * sines[k]!;
      const v = c * sines[k]! + d * cosines[k]!;
      toRe[k] = a + u;
      toIm[k] = b + v;
      toRe[l] = a - u;
      toIm[l] = v - b;
    }
  }
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
  let half = 4;
  for (; half < n / 2; half *= 4) twoRounds(re, im, cosines, sines, half);
  if (half < n) lastRound(re, im, cosines, sines);
}

/** Joins four neighbours of `half` samples each; three turns of four do for two rounds. */
function twoRounds(
  re: Float64Array,
  im: Float64Array,
  cosines: Float64Array,
  sines: Float64Array,
  half: number,
): void {
  const n = re.length;
  const step = n / (2 * half);
  for (let block = 0; block < n; block += 4 * half) {
    const end = block + half;
    for (let i = block, at = 0; i < end; i++, at += step) {
      const k = i + half;
      const l = k + half;
      const m = l + half;
      const c1 = cosines[2 * at]!;
      const s1 = sines[2 * at]!;
      const c2 = cosines[at]!;
      const s2 = sines[at]!;
      const c3 = cosines[3 * at]!;
      const s3 = sines[3 * at]!;
      const bRe = re[k]! * c1 - im[k]! * s1;
      const bIm = re[k]! * s1 + im[k]! * c1;
      const cRe = re[l]! * c2 - im[l]! * s2;
      const cIm = re[l]! * s2 + im[l]! * c2;
      const dRe = re[m]! * c3 - im[m]! * s3;
      const dIm = re[m]! * s3 + im[m]! * c3;
      const p = re[i]! + bRe;
      const q = im[i]! + bIm;
      const r = re[i]! - bRe;
      const s = im[i]! - bIm;
      const t = cRe + dRe;
      const u = cIm + dIm;
      const v = cRe - dRe;
      const w = cIm - dIm;
      re[i] = p + t;
      im[i] = q + u;
      re[k] = r + w;
      im[k] = s - v;
      re[l] = p - t;
      im[l] = q - u;
      re[m] = r - w;
      im[m] = s + v;
    }
  }
}

/** Joins the two halves, where an odd number of rounds is to be made. */
function lastRound(re: Float64Array, im: Float64Array, cosines: Float64Array, sines: Float64Array): void {
  const half = re.length / 2;
  for (let top = 0, at = 0; top < half; top++, at += 2) {
    const low = top + half;
    const x = re[low]! * cosines[at]! - im[low]! * sines[at]!;
    const y = re[low]! * sines[at]! + im[low]! * cosines[at]!;
    const u = re[top]!;
    const v = im[top]!;
    re[low] = u - x;
    im[low] = v - y;
    re[top] = u + x;
    im[top] = v + y;
  }
}

/** Where sample i goes: its number's bits in reverse order. */
function reversed(n: number): Uint16Array {
  const places = new Uint16Array(n);
  for (let i = 1; i < n; i++) places[i] = (places[i >> 1]! >> 1) | (i & 1 ? n >> 1 : 0);
  return places;
}
