/**
 * What a chain of sections does to a sine: gain, phase, phase delay, and how much white noise it lets through.
 *
 * The phase is summed section by section and never wraps: for a stable section the denominator
 * 1 + a1 e^-jw + a2 e^-2jw is a product of two factors with positive real part, so that its argument lies strictly
 * within (-pi, pi); the numerators used here are symmetric or antisymmetric, so that theirs is linear in w. The phase is
 * thus anchored where the filter passes: at 0 Hz for a low pass and a notch, at the centre for a band pass, at half the
 * rate for a high pass.
 */
import type { Section } from '@/signal/filter-design';

export type Response = { magnitude: number; phaseRad: number };

/** Response of the chain at `hz` (0 to half the rate). */
export function responseAt(sections: readonly Section[], hz: number, rateHz: number): Response {
  const w = (2 * Math.PI * hz) / rateHz;
  const cos1 = Math.cos(w);
  const sin1 = Math.sin(w);
  const cos2 = Math.cos(2 * w);
  const sin2 = Math.sin(2 * w);
  let magnitude = 1;
  let phaseRad = 0;
  for (const { b0, b1, b2, a1, a2 } of sections) {
    const re = 1 + a1 * cos1 + a2 * cos2;
    const im = -a1 * sin1 - a2 * sin2;
    magnitude *= Math.hypot(b0 + b1 * cos1 + b2 * cos2, b1 * sin1 + b2 * sin2) / Math.hypot(re, im);
    phaseRad += numeratorPhase(b0, b1, b2, w, cos1) - Math.atan2(im, re);
  }
  return { magnitude, phaseRad };
}

function numeratorPhase(b0: number, b1: number, b2: number, w: number, cos1: number): number {
  if (b0 * b2 < 0) return Math.PI / 2 - w;
  return b1 + 2 * b0 * cos1 < 0 ? Math.PI - w : -w;
}

/** `-arg H(f) / (2 pi f)`, s; negative where the phase leads. */
export function phaseDelayS(sections: readonly Section[], hz: number, rateHz: number): number {
  return sections.length === 0 ? 0 : -responseAt(sections, hz, rateHz).phaseRad / (2 * Math.PI * hz);
}

/**
 * Delay at 0 Hz, s, of a chain that passes 0 Hz (its group delay there); 0 for a chain that does not, since its phase
 * delay has no limit at 0 Hz.
 */
export function dcDelayS(sections: readonly Section[], rateHz: number): number {
  let samples = 0;
  for (const { b0, b1, b2, a1, a2 } of sections) {
    const gain = b0 + b1 + b2;
    if (Math.abs(gain) < 1e-12 * (Math.abs(b0) + Math.abs(b1) + Math.abs(b2))) return 0;
    samples += (b1 + 2 * b2) / gain - (a1 + 2 * a2) / (1 + a1 + a2);
  }
  return samples / rateHz;
}

/** |H|^2 of the chain at `w` radians a sample: what `responseAt` says without its phase, at a tenth of the cost. */
export function powerAt(sections: readonly Section[], w: number): number {
  const cos1 = Math.cos(w);
  const sin1 = Math.sin(w);
  const cos2 = 2 * cos1 * cos1 - 1;
  const sin2 = 2 * sin1 * cos1;
  let power = 1;
  for (const { b0, b1, b2, a1, a2 } of sections) {
    const re = b0 + b1 * cos1 + b2 * cos2;
    const im = b1 * sin1 + b2 * sin2;
    const fedRe = 1 + a1 * cos1 + a2 * cos2;
    const fedIm = a1 * sin1 + a2 * sin2;
    power *= (re * re + im * im) / (fedRe * fedRe + fedIm * fedIm);
  }
  return power;
}

const steps = 1500;
const decades = 7;

/**
 * White noise behind the chain.
 * @returns its rms over what went in (the root of the mean of |H|^2 up to half the rate), and the correlation between its
 * neighbouring samples (the mean of cos w over |H|^2).
 */
export function noiseBehind(sections: readonly Section[]): { gain: number; correlation: number } {
  if (sections.length === 0) return { gain: 1, correlation: 0 };
  const ratio = 10 ** (decades / steps);
  let w = Math.PI * 10 ** -decades;
  let lastW = 0;
  let last = powerAt(sections, w);
  let power = 0;
  let product = 0;
  for (let k = 0; k <= steps; k++) {
    const here = powerAt(sections, w);
    const share = ((last + here) / 2) * (w - lastW);
    power += share;
    product += share * Math.cos((w + lastW) / 2);
    last = here;
    lastW = w;
    w *= ratio;
  }
  return { gain: Math.sqrt(power / lastW), correlation: product / power };
}
