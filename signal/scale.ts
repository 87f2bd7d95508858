/**
 * From a channel's samples to volts: `(code - codeOffset) * voltsPerCode` for integer types, as they are for floats.
 * One loop for each input type: a loop that sees several kinds of array is three times slower.
 */
import type { Channel, SampleArray } from '@/signal/model';

/** True where the array holds ADC codes. */
export function holdsCodes(array: SampleArray): boolean {
  return !(array instanceof Float32Array || array instanceof Float64Array);
}

/** What turns a sample of this array into volts: `(sample - offset) * factor`. */
export function scaleOf(
  array: SampleArray,
  channel: Pick<Channel, 'codeOffset' | 'voltsPerCode'>,
): { offset: number; factor: number } {
  return holdsCodes(array)
    ? { offset: channel.codeOffset, factor: channel.voltsPerCode }
    : { offset: 0, factor: 1 };
}

/** Writes `source[from..to)` as volts to `out`, beginning at `out[at]`. */
export function toVolts(
  source: SampleArray,
  from: number,
  to: number,
  channel: Pick<Channel, 'codeOffset' | 'voltsPerCode'>,
  out: Float64Array,
  at: number,
): void {
  const { codeOffset, voltsPerCode } = channel;
  if (source instanceof Int16Array) int16ToVolts(source, from, to, codeOffset, voltsPerCode, out, at);
  else if (source instanceof Uint16Array) uint16ToVolts(source, from, to, codeOffset, voltsPerCode, out, at);
  else if (source instanceof Float32Array) float32ToVolts(source, from, to, out, at);
  else if (source instanceof Float64Array) float64ToVolts(source, from, to, out, at);
  else if (source instanceof Uint8Array) uint8ToVolts(source, from, to, codeOffset, voltsPerCode, out, at);
  else if (source instanceof Int32Array) int32ToVolts(source, from, to, codeOffset, voltsPerCode, out, at);
  else uint32ToVolts(source, from, to, codeOffset, voltsPerCode, out, at);
}

function int16ToVolts(
  s: Int16Array,
  from: number,
  to: number,
  offset: number,
  factor: number,
  out: Float64Array,
  at: number,
): void {
  for (let i = from, j = at; i < to; i++, j++) out[j] = (s[i]! - offset) * factor;
}

function uint16ToVolts(
  s: Uint16Array,
  from: number,
  to: number,
  offset: number,
  factor: number,
  out: Float64Array,
  at: number,
): void {
  for (let i = from, j = at; i < to; i++, j++) out[j] = (s[i]! - offset) * factor;
}

function uint8ToVolts(
  s: Uint8Array,
  from: number,
  to: number,
  offset: number,
  factor: number,
  out: Float64Array,
  at: number,
): void {
  for (let i = from, j = at; i < to; i++, j++) out[j] = (s[i]! - offset) * factor;
}

function int32ToVolts(
  s: Int32Array,
  from: number,
  to: number,
  offset: number,
  factor: number,
  out: Float64Array,
  at: number,
): void {
  for (let i = from, j = at; i < to; i++, j++) out[j] = (s[i]! - offset) * factor;
}

function uint32ToVolts(
  s: Uint32Array,
  from: number,
  to: number,
  offset: number,
  factor: number,
  out: Float64Array,
  at: number,
): void {
  for (let i = from, j = at; i < to; i++, j++) out[j] = (s[i]! - offset) * factor;
}

function float32ToVolts(s: Float32Array, from: number, to: number, out: Float64Array, at: number): void {
  for (let i = from, j = at; i < to; i++, j++) out[j] = s[i]!;
}

function float64ToVolts(s: Float64Array, from: number, to: number, out: Float64Array, at: number): void {
  for (let i = from, j = at; i < to; i++, j++) out[j] = s[i]!;
}
