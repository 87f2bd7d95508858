/**
 * The inner loops of the block kernel, over float64 in direct form II transposed,
 *
 *     y = b0 x + s1;  s1 = (b1 x + s2) - a1 y;  s2 = b2 x - a2 y
 *
 * Two sections run in one pass, which keeps the feedback values in registers. Where the numerator is [1, 2, 1], y = x + s1
 * is put into the second equation: s1 = ((2 - a1) x + s2) - a1 s1 then waits for one sum less from sample to sample, which
 * is what such a loop's time goes into (results differ by rounding only).
 *
 * `state` holds s1 and s2 of each section; `at` is the index of the first one's s1, unless said otherwise.
 */
import type { Section } from '@/signal/filter-design';

/** Codes are scaled on the way, `(code - offset) * gain`; writes to `out[at..)`, and uses the first two sections' state. */
export function foldedPairFromInt16(
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

export function foldedPair(
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

export function foldedSingle(
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

export function pair(
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

export function single(
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
