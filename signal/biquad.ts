/**
 * The block kernel: a chain of second-order sections. State is float64 always (float32 is unusable at low cutoffs).
 * Sections whose zeros all lie at half the rate (every low pass here) have their numerators
 * folded to [1, 2, 1] with the whole chain's gain in front; their first pass can read 16-bit codes directly, which is the
 * commonest case and saves a pass over the block.
 *
 * Layout of `state`: two numbers a section, s1 and s2, in the order of the sections.
 */
import { foldedPair, foldedPairFromInt16, foldedSingle, pair, single } from '@/signal/biquad-kernels';
import type { Section } from '@/signal/filter-design';

export type Cascade = {
  sections: readonly Section[];
  /** All numerators are [1, 2, 1]; `gain` stands in front of the first. */
  folded: boolean;
  gain: number;
  state: Float64Array;
  primed: boolean;
};

/**
 * A chain at rest: not primed, so that the first sample that it is given sets the state it would have after an endless
 * input of that.
 * @param sections as `designFilters` gives them; none: what comes in goes out.
 */
export function createCascade(sections: readonly Section[]): Cascade {
  const folded = sections.length > 0 && sections.every(({ b0, b1, b2 }) => near(b1, 2 * b0) && near(b2, b0));
  const gain = folded ? sections.reduce((product, { b0 }) => product * b0, 1) : 1;
  return {
    sections: folded ? sections.map(({ a1, a2 }) => ({ b0: 1, b1: 2, b2: 1, a1, a2 })) : sections,
    folded,
    gain,
    state: new Float64Array(2 * sections.length),
    primed: false,
  };
}

/** Sets the state that the chain would have after an endless constant input of `value`, each section by the one before. */
export function primeCascade(cascade: Cascade, value: number): void {
  let x = value * cascade.gain;
  cascade.sections.forEach(({ b0, b1, b2, a1, a2 }, index) => {
    const y = (x * (b0 + b1 + b2)) / (1 + a1 + a2);
    const s2 = b2 * x - a2 * y;
    cascade.state[2 * index] = b1 * x + s2 - a1 * y;
    cascade.state[2 * index + 1] = s2;
    x = y;
  });
  cascade.primed = true;
}

/** The next sample primes it anew. */
export function resetCascade(cascade: Cascade): void {
  cascade.state.fill(0);
  cascade.primed = false;
}

/** Filters `buffer[from..to)` in place, priming from its first sample where that is due. */
export function runCascade(cascade: Cascade, buffer: Float64Array, from: number, to: number): void {
  const { sections, state } = cascade;
  if (sections.length === 0 || from >= to) return;
  if (!cascade.primed) primeCascade(cascade, buffer[from]!);
  if (cascade.folded) {
    runFolded(cascade, 0, buffer, from, to);
    return;
  }
  let index = 0;
  for (; index + 1 < sections.length; index += 2)
    pair(sections[index]!, sections[index + 1]!, state, 2 * index, buffer, from, to);
  if (index < sections.length) single(sections[index]!, state, 2 * index, buffer, from, to);
}

/** True where `runCascadeFromInt16` may be called. */
export function takesCodes(cascade: Cascade): boolean {
  return cascade.folded && cascade.sections.length >= 2;
}

/** Scales `codes[from..to)` to volts, `(code - offset) * factor`, and filters them into `out[at..)`. Needs `takesCodes`. */
export function runCascadeFromInt16(
  cascade: Cascade,
  codes: Int16Array,
  from: number,
  to: number,
  offset: number,
  factor: number,
  out: Float64Array,
  at: number,
): void {
  if (from >= to) return;
  if (!cascade.primed) primeCascade(cascade, (codes[from]! - offset) * factor);
  const { sections, state } = cascade;
  foldedPairFromInt16(
    sections[0]!,
    sections[1]!,
    offset,
    factor * cascade.gain,
    state,
    codes,
    from,
    to,
    out,
    at,
  );
  runFolded(cascade, 2, out, at, at + (to - from));
}

/** Values that would become denormal numbers are set to 0; call it at fixed places of the stream only. */
export function flushCascade(cascade: Cascade): void {
  const { state } = cascade;
  for (let i = 0; i < state.length; i++) if (Math.abs(state[i]!) < 1e-30) state[i] = 0;
}

function runFolded(cascade: Cascade, first: number, buffer: Float64Array, from: number, to: number): void {
  const { sections, state } = cascade;
  let index = first;
  for (; index + 1 < sections.length; index += 2) {
    const gain = index === 0 ? cascade.gain : 1;
    foldedPair(sections[index]!, sections[index + 1]!, gain, state, 2 * index, buffer, from, to);
  }
  if (index < sections.length) {
    foldedSingle(sections[index]!, index === 0 ? cascade.gain : 1, state, 2 * index, buffer, from, to);
  }
}

function near(value: number, wanted: number): boolean {
  return Math.abs(value - wanted) <= 1e-12 * Math.abs(wanted);
}
