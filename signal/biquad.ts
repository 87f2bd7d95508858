/**
 * The block kernel: a chain of second-order sections over float64, direct form II transposed,
 *
 *     y = b0 x + s1;  s1 = (b1 x + s2) - a1 y;  s2 = b2 x - a2 y
 *
 * State is float64 always (float32 is unusable at low cutoffs). Two sections run in one pass, which keeps the feedback
 * values in registers. Sections whose zeros all lie at half the rate (every low pass here) have their numerators
 * folded to [1, 2, 1] with the whole chain's gain in front; their first pass can read 16-bit codes directly, which is the
 * commonest case and saves a pass over the block.
 *
 * Layout of `state`: two numbers a section, s1 and s2, in the order of the sections.
 */
import type { Section } from '@/signal/filter-design';

export type Cascade = {
  sections: readonly Section[];
  /** All numerators are [1, 2, 1]; `gain` stands in front of the first. */
  folded: boolean;
  gain: number;
  state: Float64Array;
  primed: boolean;
};

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

function foldedPairFromInt16(
  first: Section,
  second: Section,
  offset: number,
  gain: number,
  state: Float64Array,
  codes: Int16Array,
  from: number,
  to: number,
  out: Float64Array,
  at: number,
): void {
  const p1 = first.a1;
  const p2 = first.a2;
  const q1 = second.a1;
  const q2 = second.a2;
  const p = 2 - p1;
  const q = 2 - q1;
  const shift = at - from;
  let s1 = state[0]!;
  let s2 = state[1]!;
  let t1 = state[2]!;
  let t2 = state[3]!;
  for (let i = from; i < to; i++) {
    const x = (codes[i]! - offset) * gain;
    const y = x + s1;
    const z = y + t1;
    out[i + shift] = z;
    s1 = p * x + s2 - p1 * s1;
    s2 = x - p2 * y;
    t1 = q * y + t2 - q1 * t1;
    t2 = y - q2 * z;
  }
  state[0] = s1;
  state[1] = s2;
  state[2] = t1;
  state[3] = t2;
}

function foldedPair(
  first: Section,
  second: Section,
  gain: number,
  state: Float64Array,
  at: number,
  buffer: Float64Array,
  from: number,
  to: number,
): void {
  const p1 = first.a1;
  const p2 = first.a2;
  const q1 = second.a1;
  const q2 = second.a2;
  const p = 2 - p1;
  const q = 2 - q1;
  let s1 = state[at]!;
  let s2 = state[at + 1]!;
  let t1 = state[at + 2]!;
  let t2 = state[at + 3]!;
  for (let i = from; i < to; i++) {
    const x = buffer[i]! * gain;
    const y = x + s1;
    const z = y + t1;
    buffer[i] = z;
    s1 = p * x + s2 - p1 * s1;
    s2 = x - p2 * y;
    t1 = q * y + t2 - q1 * t1;
    t2 = y - q2 * z;
  }
  state[at] = s1;
  state[at + 1] = s2;
  state[at + 2] = t1;
  state[at + 3] = t2;
}

function foldedSingle(
  section: Section,
  gain: number,
  state: Float64Array,
  at: number,
  buffer: Float64Array,
  from: number,
  to: number,
): void {
  const { a1, a2 } = section;
  const b = 2 - a1;
  let s1 = state[at]!;
  let s2 = state[at + 1]!;
  for (let i = from; i < to; i++) {
    const x = buffer[i]! * gain;
    const y = x + s1;
    buffer[i] = y;
    s1 = b * x + s2 - a1 * s1;
    s2 = x - a2 * y;
  }
  state[at] = s1;
  state[at + 1] = s2;
}

function pair(
  first: Section,
  second: Section,
  state: Float64Array,
  at: number,
  buffer: Float64Array,
  from: number,
  to: number,
): void {
  const { b0, b1, b2, a1, a2 } = first;
  const { b0: c0, b1: c1, b2: c2, a1: d1, a2: d2 } = second;
  let s1 = state[at]!;
  let s2 = state[at + 1]!;
  let t1 = state[at + 2]!;
  let t2 = state[at + 3]!;
  for (let i = from; i < to; i++) {
    const x = buffer[i]!;
    const y = b0 * x + s1;
    s1 = b1 * x + s2 - a1 * y;
    s2 = b2 * x - a2 * y;
    const z = c0 * y + t1;
    t1 = c1 * y + t2 - d1 * z;
    t2 = c2 * y - d2 * z;
    buffer[i] = z;
  }
  state[at] = s1;
  state[at + 1] = s2;
  state[at + 2] = t1;
  state[at + 3] = t2;
}

function single(
  section: Section,
  state: Float64Array,
  at: number,
  buffer: Float64Array,
  from: number,
  to: number,
): void {
  const { b0, b1, b2, a1, a2 } = section;
  let s1 = state[at]!;
  let s2 = state[at + 1]!;
  for (let i = from; i < to; i++) {
    const x = buffer[i]!;
    const y = b0 * x + s1;
    s1 = b1 * x + s2 - a1 * y;
    s2 = b2 * x - a2 * y;
    buffer[i] = y;
  }
  state[at] = s1;
  state[at + 1] = s2;
}

function near(value: number, wanted: number): boolean {
  return Math.abs(value - wanted) <= 1e-12 * Math.abs(wanted);
}
