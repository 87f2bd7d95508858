/**
 * Forward-backward filtering of a kept capture: once through the chain of sections, once back, so that no frequency is
 * delayed at all and the gain is the SQUARE of the chain's (3 dB become 6 at a cutoff). For captures only: it needs the
 * samples after an instant.
 *
 * Both ends are extended by the signal turned about its end point (odd extension), for as long as the chain remembers,
 * and each pass starts from the state of an endless constant: a record that begins at 2.5 V makes no step.
 * Source: F. Gustafsson, IEEE Trans. Signal Processing 44 (1996) 988-992 for the problem of the ends; the odd extension
 * is the common way of toolboxes.
 */
import { createCascade, runCascade } from '@/signal/biquad';
import type { Section } from '@/signal/filter-design';
import { got, notFinite, refused, type Outcome } from '@/signal/statistics/issue';

/** A state has died away when this share of it is left. */
const forgotten = 1e-4;

/**
 * Samples after which the chain has forgotten where it started: by its slowest pole, 0 for an empty chain.
 * Issues: bad-setting (a pole on or outside the unit circle, or coefficients that are not finite).
 */
export function memorySamples(sections: readonly Section[]): Outcome<number> {
  let slowest = 0;
  for (const { a1, a2 } of sections) {
    const disc = a1 * a1 - 4 * a2;
    const radius = disc < 0 ? Math.sqrt(a2) : (Math.abs(a1) + Math.sqrt(disc)) / 2;
    if (!(radius < 1)) return refused('bad-setting', `a filter with a pole at radius ${radius} has no end`);
    slowest = Math.max(slowest, radius);
  }
  if (sections.length === 0) return got(0);
  const byPole = slowest === 0 ? 0 : Math.log(forgotten) / Math.log(slowest);
  // Sections of equal poles add up, and even without poles each holds two samples.
  return got(Math.ceil(byPole) * sections.length + 2 * sections.length);
}

/**
 * The filtered copy of one unbroken stretch; call for each stretch between gaps.
 * @param volts n samples, finite.
 * @param padding samples of the extension at each end; null: as long as the chain remembers. Never more than n - 1.
 * @returns n samples; none for none.
 * Issues: bad-setting, not-finite, too-few (one sample cannot be extended, unless the chain is empty).
 */
export function filterZeroPhase(
  volts: ArrayLike<number>,
  sections: readonly Section[],
  padding: number | null = null,
): Outcome<Float64Array> {
  const n = volts.length;
  const bad = notFinite(volts, 'sample');
  if (bad) return bad;
  const memory = memorySamples(sections);
  if (!memory.ok) return memory;
  if (sections.length === 0 || n === 0) return got(Float64Array.from(volts));
  if (n === 1) return refused('too-few', 'one sample has no direction to be extended in');
  if (padding !== null && !(Number.isSafeInteger(padding) && padding >= 0))
    return refused('bad-setting', `padding of ${padding} samples`);
  const pad = Math.min(n - 1, padding ?? memory.value);
  const buffer = oddExtension(volts, pad);
  for (let pass = 0; pass < 2; pass++) {
    // A new chain primes itself from the first sample that it is given.
    runCascade(createCascade(sections), buffer, 0, buffer.length);
    buffer.reverse();
  }
  const out = buffer.slice(pad, pad + n);
  return notFinite(out, 'filtered sample') ?? got(out);
}

/** `pad` samples turned about the first before it, `pad` turned about the last after it. */
function oddExtension(volts: ArrayLike<number>, pad: number): Float64Array {
  const n = volts.length;
  const out = new Float64Array(n + 2 * pad);
  const first = volts[0]!;
  const last = volts[n - 1]!;
  for (let i = 0; i < n; i++) out[pad + i] = volts[i]!;
  for (let i = 1; i <= pad; i++) {
    out[pad - i] = 2 * first - volts[i]!;
    out[pad + n - 1 + i] = 2 * last - volts[n - 1 - i]!;
  }
  return out;
}
