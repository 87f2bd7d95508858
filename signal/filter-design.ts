/**
 * From a filter's settings to sections of second order, `y[n] = b0 x[n] + b1 x[n-1] + b2 x[n-2] - a1 y[n-1] - a2 y[n-2]`
 * (a0 = 1, minus signs in front of a1 and a2).
 *
 * Butterworth low and high pass come from fili, where they were found right over the whole range. Everything else is a
 * bilinear transform, s = 2 fs (z - 1)/(z + 1), of an analog prototype whose edges are pre-warped by
 * W = 2 fs tan(pi f / fs).
 * Sources: S. Butterworth, Wireless Engineer 7 (1930); W. E. Thomson, Proc. IEE 96 (1949) for Bessel; the low pass to
 * band pass and band stop maps s -> (s^2 + W0^2)/(B s) and its inverse are the textbook ones.
 */
import Fili from 'fili';
import type { Filter, FilterOrder } from '@/signal/model';

export type Section = { b0: number; b1: number; b2: number; a1: number; a2: number };
type Complex = { re: number; im: number };

/**
 * Upper half of the poles of the Bessel low pass, scaled to |H(j)| = 1/sqrt(2): roots of the reverse Bessel polynomial
 * of that order, divided by its -3 dB frequency.
 */
const besselPoles: Record<FilterOrder, readonly (readonly [number, number])[]> = {
  2: [[-1.1016013305921608, 0.636009824757034]],
  4: [
    [-0.995208764350272, 1.257105739454664],
    [-1.3700678305514422, 0.41024971749375155],
  ],
  6: [
    [-0.9306565229468591, 1.6618632689425918],
    [-1.3818580975965642, 0.9714718907115716],
    [-1.5714904036160318, 0.32089637422262396],
  ],
  8: [
    [-0.8928697188471375, 1.9983258436413065],
    [-1.3738412176373769, 1.388356575877563],
    [-1.6369394181268888, 0.8227956251396998],
    [-1.757408400401653, 0.2728675751022327],
  ],
};

/** Sections of one filter, in the order in which they run. The settings must have passed `validateSetup`. */
export function designFilter(filter: Filter, rateHz: number): Section[] {
  switch (filter.kind) {
    case 'none':
      return [];
    case 'lowpass':
    case 'highpass':
      return filter.family === 'butterworth'
        ? butterworth(filter.kind, filter.order, filter.cutoffHz, rateHz)
        : bessel(filter.kind, filter.order, filter.cutoffHz, rateHz);
    case 'bandpass':
    case 'notch':
      return bandFilter(filter.kind, filter.order / 2, filter.lowHz, filter.highHz, rateHz);
  }
}

/** Sections of a whole chain. */
export function designFilters(filters: Filter | readonly Filter[], rateHz: number): Section[] {
  const list: readonly Filter[] = Array.isArray(filters) ? filters : [filters as Filter];
  return list.flatMap((filter) => designFilter(filter, rateHz));
}

function butterworth(
  kind: 'lowpass' | 'highpass',
  order: FilterOrder,
  cutoffHz: number,
  rateHz: number,
): Section[] {
  const cascades = new Fili.CalcCascades();
  const params = { order: order / 2, characteristic: 'butterworth' as const, Fs: rateHz, Fc: cutoffHz };
  const sections = kind === 'lowpass' ? cascades.lowpass(params) : cascades.highpass(params);
  return sections.map(({ b, a }) => checked({ b0: b[0], b1: b[1], b2: b[2], a1: a[0], a2: a[1] }));
}

function bessel(
  kind: 'lowpass' | 'highpass',
  order: FilterOrder,
  cutoffHz: number,
  rateHz: number,
): Section[] {
  const warped = Math.tan((Math.PI * cutoffHz) / rateHz);
  return besselPoles[order].map(([re, im]) => {
    const size = re * re + im * im;
    // High pass: s -> 1/s turns the pole p into 1/p, which is conj(p)/|p|^2.
    const pole =
      kind === 'lowpass'
        ? { re: re * warped, im: im * warped }
        : { re: (re / size) * warped, im: (im / size) * warped };
    const { a1, a2 } = bilinearPair(pole, { re: pole.re, im: -pole.im });
    const gain = kind === 'lowpass' ? (1 + a1 + a2) / 4 : (1 - a1 + a2) / 4;
    return checked({ b0: gain, b1: kind === 'lowpass' ? 2 * gain : -2 * gain, b2: gain, a1, a2 });
  });
}

/** `count` prototype poles make `count` sections. Frequencies are in units of 2 fs throughout. */
function bandFilter(
  kind: 'bandpass' | 'notch',
  count: number,
  lowHz: number,
  highHz: number,
  rateHz: number,
): Section[] {
  const low = Math.tan((Math.PI * lowHz) / rateHz);
  const high = Math.tan((Math.PI * highHz) / rateHz);
  const centreSquared = low * high;
  const width = high - low;
  // Of W0 = sqrt(low high): cos(2 atan W0).
  const cosCentre = (1 - centreSquared) / (1 + centreSquared);
  const sections: Section[] = [];
  for (let k = 0; k < count; k++) {
    const angle = (Math.PI * (2 * k + count + 1)) / (2 * count);
    const prototype: Complex = { re: Math.cos(angle), im: Math.sin(angle) };
    if (prototype.im < -1e-12) continue;
    const real = Math.abs(prototype.im) < 1e-12;
    // |p| = 1, so 1/p is its conjugate.
    const half: Complex =
      kind === 'bandpass'
        ? { re: (prototype.re * width) / 2, im: real ? 0 : (prototype.im * width) / 2 }
        : { re: (prototype.re * width) / 2, im: real ? 0 : (-prototype.im * width) / 2 };
    const root = complexSqrt({
      re: half.re * half.re - half.im * half.im - centreSquared,
      im: 2 * half.re * half.im,
    });
    const first = { re: half.re + root.re, im: half.im + root.im };
    const second = { re: half.re - root.re, im: half.im - root.im };
    const pairs: [Complex, Complex][] = real
      ? [[first, second]]
      : [
          [first, { re: first.re, im: -first.im }],
          [second, { re: second.re, im: -second.im }],
        ];
    for (const [p, q] of pairs) {
      const { a1, a2 } = bilinearPair(p, q);
      sections.push(
        checked(kind === 'bandpass' ? bandPassSection(a1, a2, cosCentre) : notchSection(a1, a2, cosCentre)),
      );
    }
  }
  return sections;
}

/** Zeros at 0 and half the rate; gain 1 at the centre. */
function bandPassSection(a1: number, a2: number, cosCentre: number): Section {
  const sinCentre = Math.sqrt(1 - cosCentre * cosCentre);
  const cosTwice = 2 * cosCentre * cosCentre - 1;
  const sinTwice = 2 * sinCentre * cosCentre;
  const denominator = Math.hypot(1 + a1 * cosCentre + a2 * cosTwice, a1 * sinCentre + a2 * sinTwice);
  const gain = denominator / (2 * sinCentre);
  return { b0: gain, b1: 0, b2: -gain, a1, a2 };
}

/** Zeros at the centre; gain 1 at 0 Hz. */
function notchSection(a1: number, a2: number, cosCentre: number): Section {
  const gain = (1 + a1 + a2) / (2 - 2 * cosCentre);
  return { b0: gain, b1: -2 * cosCentre * gain, b2: gain, a1, a2 };
}

/** Denominator of the section with the analog poles p and q (both real, or conjugates), s in units of 2 fs. */
function bilinearPair(p: Complex, q: Complex): { a1: number; a2: number } {
  // (s - p)(s - q) with s = (z - 1)/(z + 1) gives z^2 (1 - S + P) + z (2 P - 2) + (1 + S + P).
  const sum = p.re + q.re;
  const product = p.re * q.re - p.im * q.im;
  const lead = 1 - sum + product;
  return { a1: (2 * product - 2) / lead, a2: (1 + sum + product) / lead };
}

function complexSqrt(z: Complex): Complex {
  const size = Math.hypot(z.re, z.im);
  const re = Math.sqrt(Math.max(0, (size + z.re) / 2));
  const im = Math.sqrt(Math.max(0, (size - z.re) / 2));
  return { re, im: z.im < 0 ? -im : im };
}

/** A design that is not stable is a fault of ours: the settings were validated before. */
function checked(section: Section): Section {
  const { a1, a2 } = section;
  const stable = Math.abs(a2) < 1 && Math.abs(a1) < 1 + a2;
  if (!stable || !Number.isFinite(section.b0 + section.b1 + section.b2)) {
    throw new Error(`unstable filter section a1=${a1} a2=${a2}`);
  }
  return section;
}
