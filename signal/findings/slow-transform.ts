/**
 * Spectrum of real samples behind a Hann window: two neighbours make one complex sample, so that a transform of half the
 * size does, z[m] = x[2m] + j x[2m + 1]; with Z its transform and h half the size,
 * X[k] = (Z[k] + Z*[h - k]) / 2 - j e^(-j pi k / h) (Z[k] - Z*[h - k]) / 2.
 * Sources: F. J. Harris, Proc. IEEE 66 (1978) 51-83 for the window; the textbook transform of radix 4.
 */
export class SlowTransform {
  readonly size: number;
  private readonly tables: Tables;
  private readonly re: Float64Array;
  private readonly im: Float64Array;

  /** @param size a power of two, 16 or more. */
  constructor(size: number) {
    this.size = size;
    this.tables = tablesOf(size);
    this.re = new Float64Array(size / 2);
    this.im = new Float64Array(size / 2);
  }

  /**
   * Amplitudes of bins 1 to half the size less one, of the samples `from` on of a ring.
   * @param toRe, toIm of half the size or longer. Same units as the samples.
   */
  read(ring: Float64Array, from: number, toRe: Float64Array, toIm: Float64Array): void {
    const { re, im } = this;
    const { window, places, cosines, sines } = this.tables;
    gather(ring, from, window, places, re, im);
    const n = re.length;
    let half = 4;
    for (; half < n / 2; half *= 4) twoRounds(re, im, cosines, sines, half);
    if (half < n) joinAndUnpack(re, im, cosines, sines, toRe, toIm);
    else unpack(re, im, cosines, sines, toRe, toIm);
  }
}

type Tables = {
  readonly window: Float64Array;
  /** Of -pi i / h, for three quarters of a turn. */
  readonly cosines: Float64Array;
  readonly sines: Float64Array;
  /** Which pair of samples goes to place i. */
  readonly places: Uint16Array;
};

/** One set a size does for all channels of all streams. */
const known = new Map<number, Tables>();

function tablesOf(size: number): Tables {
  const before = known.get(size);
  if (before) return before;
  const half = size / 2;
  const turn = { length: (3 * half) / 2 };
  const tables = {
    // The mean of the window is a half; twice that of each side band makes an amplitude: 4 / n.
    window: Float64Array.from(
      { length: size },
      (_, i) => ((0.5 - 0.5 * Math.cos((2 * Math.PI * i) / size)) * 4) / size,
    ),
    cosines: Float64Array.from(turn, (_, i) => Math.cos((Math.PI * i) / half)),
    sines: Float64Array.from(turn, (_, i) => -Math.sin((Math.PI * i) / half)),
    places: reversed(half),
  };
  known.set(size, tables);
  return tables;
}

/** The windowed samples in bit-reversed order, and at once the first two rounds, which turn by quarters only. */
function gather(
  ring: Float64Array,
  from: number,
  window: Float64Array,
  places: Uint16Array,
  re: Float64Array,
  im: Float64Array,
): void {
  const mask = ring.length - 1;
  const n = re.length;
  const quarter = n >> 1;
  // Reversed, neighbours stand half the samples apart, and the next two a quarter further on.
  for (let k = 0; k < n; k += 4) {
    const p = 2 * places[k]!;
    const q = p + 2 * quarter;
    const r = p + quarter;
    const s = q + quarter;
    const pRe = ring[(from + p) & mask]! * window[p]!;
    const pIm = ring[(from + p + 1) & mask]! * window[p + 1]!;
    const qRe = ring[(from + q) & mask]! * window[q]!;
    const qIm = ring[(from + q + 1) & mask]! * window[q + 1]!;
    const rRe = ring[(from + r) & mask]! * window[r]!;
    const rIm = ring[(from + r + 1) & mask]! * window[r + 1]!;
    const sRe = ring[(from + s) & mask]! * window[s]!;
    const sIm = ring[(from + s + 1) & mask]! * window[s + 1]!;
    const a = pRe + qRe;
    const b = pIm + qIm;
    const c = pRe - qRe;
    const d = pIm - qIm;
    const e = rRe + sRe;
    const f = rIm + sIm;
    const g = rRe - sRe;
    const h = rIm - sIm;
    re[k] = a + e;
    im[k] = b + f;
    re[k + 1] = c + h;
    im[k + 1] = d - g;
    re[k + 2] = a - e;
    im[k + 2] = b - f;
    re[k + 3] = c - h;
    im[k + 3] = d + g;
  }
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
  const four = 4 * half;
  // One turn after the other, each for all blocks: where they are many its sines are read once.
  for (let at = 0, top = 0; top < half; top++, at += step) {
    const c1 = cosines[2 * at]!;
    const s1 = sines[2 * at]!;
    const c2 = cosines[at]!;
    const s2 = sines[at]!;
    const c3 = cosines[3 * at]!;
    const s3 = sines[3 * at]!;
    for (let i = top; i < n; i += four) {
      const k = i + half;
      const l = k + half;
      const m = l + half;
      const kRe = re[k]!;
      const kIm = im[k]!;
      const lRe = re[l]!;
      const lIm = im[l]!;
      const mRe = re[m]!;
      const mIm = im[m]!;
      const bRe = kRe * c1 - kIm * s1;
      const bIm = kRe * s1 + kIm * c1;
      const cRe = lRe * c2 - lIm * s2;
      const cIm = lRe * s2 + lIm * c2;
      const dRe = mRe * c3 - mIm * s3;
      const dIm = mRe * s3 + mIm * c3;
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

/**
 * The last round where an odd number of them is to be made, which joins the two halves, and at once what `unpack` does: of
 * each of two places as far from the ends of a half, it makes the two that belong together.
 */
function joinAndUnpack(
  re: Float64Array,
  im: Float64Array,
  cosines: Float64Array,
  sines: Float64Array,
  toRe: Float64Array,
  toIm: Float64Array,
): void {
  const n = re.length;
  const h = n >> 1;
  for (let t = 1, u = h - 1; t <= u; t++, u--) {
    let lowRe = re[t + h]!;
    let lowIm = im[t + h]!;
    let c = cosines[2 * t]!;
    let s = sines[2 * t]!;
    let x = lowRe * c - lowIm * s;
    let y = lowRe * s + lowIm * c;
    let topRe = re[t]!;
    let topIm = im[t]!;
    const tRe = topRe + x;
    const tIm = topIm + y;
    const farTRe = topRe - x;
    const farTIm = topIm - y;
    lowRe = re[u + h]!;
    lowIm = im[u + h]!;
    c = cosines[2 * u]!;
    s = sines[2 * u]!;
    x = lowRe * c - lowIm * s;
    y = lowRe * s + lowIm * c;
    topRe = re[u]!;
    topIm = im[u]!;
    const uRe = topRe + x;
    const uIm = topIm + y;
    const farURe = topRe - x;
    const farUIm = topIm - y;
    c = cosines[t]!;
    s = sines[t]!;
    let a = (tRe + farURe) / 2;
    let b = (tIm - farUIm) / 2;
    let sum = (tIm + farUIm) / 2;
    let off = (farURe - tRe) / 2;
    x = sum * c - off * s;
    y = sum * s + off * c;
    toRe[t] = a + x;
    toIm[t] = b + y;
    toRe[u + h] = a - x;
    toIm[u + h] = y - b;
    c = cosines[u]!;
    s = sines[u]!;
    a = (uRe + farTRe) / 2;
    b = (uIm - farTIm) / 2;
    sum = (uIm + farTIm) / 2;
    off = (farTRe - uRe) / 2;
    x = sum * c - off * s;
    y = sum * s + off * c;
    toRe[u] = a + x;
    toIm[u] = b + y;
    toRe[t + h] = a - x;
    toIm[t + h] = y - b;
  }
  // The middle one, which belongs to itself.
  const c = cosines[0]!;
  const s = sines[0]!;
  const middleRe = re[0]! - (re[h]! * c - im[h]! * s);
  const middleIm = im[0]! - (re[h]! * s + im[h]! * c);
  toRe[h] = middleRe - middleIm * cosines[h]!;
  toIm[h] = middleIm * sines[h]!;
}

/** From the transform of pairs to that of the samples. */
function unpack(
  re: Float64Array,
  im: Float64Array,
  cosines: Float64Array,
  sines: Float64Array,
  toRe: Float64Array,
  toIm: Float64Array,
): void {
  for (let k = 1, l = re.length - 1; k <= l; k++, l--) {
    const kRe = re[k]!;
    const kIm = im[k]!;
    const lRe = re[l]!;
    const lIm = im[l]!;
    const a = (kRe + lRe) / 2;
    const b = (kIm - lIm) / 2;
    const c = (kIm + lIm) / 2;
    const d = (lRe - kRe) / 2;
    const cosine = cosines[k]!;
    const sine = sines[k]!;
    const u = c * cosine - d * sine;
    const v = c * sine + d * cosine;
    toRe[k] = a + u;
    toIm[k] = b + v;
    toRe[l] = a - u;
    toIm[l] = v - b;
  }
}

/** Where sample i goes: its number's bits in reverse order. */
function reversed(n: number): Uint16Array {
  const places = new Uint16Array(n);
  for (let i = 1; i < n; i++) places[i] = (places[i >> 1]! >> 1) | (i & 1 ? n >> 1 : 0);
  return places;
}
