/**
 * Forward-backward filtering of a stretch that comes in pieces: what `filterZeroPhase` gives of the whole stretch, to within
 * a hundred-millionth of its swing, with bounded memory. Output lags by twice what the filter remembers.
 *
 * Both passes run over pieces that end at fixed places of the stretch, so that how it was pushed changes nothing, bit for bit.
 */
import { createCascade, flushCascade, runCascade } from '@/signal/biquad';
import type { Cascade } from '@/signal/biquad';
import type { Section } from '@/signal/filter-design';
import { filterZeroPhase } from '@/signal/statistics/zero-phase';

/** Least samples of a piece. */
const leastPiece = 65_536;

/** One channel, volts in and volts out; one object serves any number of stretches, one after the other. */
export class BothWays {
  private readonly sections: readonly Section[];
  private readonly pad: number;
  /** As long as the memory at least: the pass back over what is not out yet then costs no more than some pieces. */
  private readonly pieceSamples: number;
  private forward: Cascade;
  private started = false;
  /** Samples that are not yet out: as they came, and after the pass forward. */
  private raw = new Float64Array(0);
  private passed = new Float64Array(0);
  private held = 0;
  /** The last of them, which wait for their piece to be full. */
  private fresh = 0;

  /** @param memorySamples how long the chain remembers, from `memorySamples` of `zero-phase.ts`. */
  constructor(sections: readonly Section[], memorySamples: number) {
    this.sections = sections;
    this.pad = memorySamples;
    this.pieceSamples = Math.max(leastPiece, memorySamples);
    this.forward = createCascade(sections);
  }

  /** Takes `volts`; returns what is ready, in order, the first sample first. It may be nothing. */
  push(volts: Float64Array): Float64Array {
    const out: Float64Array[] = [];
    for (let from = 0; from < volts.length;) {
      const to = Math.min(volts.length, from + this.pieceSamples - this.fresh);
      this.append(volts.subarray(from, to));
      this.fresh += to - from;
      if (this.fresh === this.pieceSamples) {
        this.passFresh();
        const ready = this.held - 2 * this.pad;
        if (ready >= this.pieceSamples) out.push(this.release(ready, this.passed.slice(0, this.held)));
      }
      from = to;
    }
    return joined(out);
  }

  /** The stretch is over: the rest of it. A new one may begin. */
  end(): Float64Array {
    this.passFresh();
    const { raw, held, pad } = this;
    let rest: Float64Array = raw.slice(0, held);
    if (this.started) {
      const work = new Float64Array(held + pad);
      work.set(this.passed.subarray(0, held));
      for (let i = 1; i <= pad; i++) work[held - 1 + i] = 2 * raw[held - 1]! - raw[held - 1 - i]!;
      runCascade(this.forward, work, held, held + pad);
      rest = this.release(held, work);
    } else if (held > 1) {
      const whole = filterZeroPhase(rest, this.sections);
      if (whole.ok) rest = whole.value;
    }
    this.held = 0;
    this.started = false;
    this.forward = createCascade(this.sections);
    return rest;
  }

  private passFresh(): void {
    if (this.started) this.pass(this.held - this.fresh);
    else if (this.held > this.pad) this.start();
    this.fresh = 0;
  }

  private append(volts: Float64Array): void {
    const needed = this.held + volts.length;
    if (needed > this.raw.length) {
      this.raw = widened(this.raw, needed);
      this.passed = widened(this.passed, needed);
    }
    this.raw.set(volts, this.held);
    this.held = needed;
  }

  /** The signal turned about its first sample goes through first, so that a record that begins at 2.5 V makes no step. */
  private start(): void {
    const { raw, pad } = this;
    const before = new Float64Array(pad);
    for (let i = 1; i <= pad; i++) before[pad - i] = 2 * raw[0]! - raw[i]!;
    runCascade(this.forward, before, 0, pad);
    this.started = true;
    this.pass(0);
  }

  private pass(from: number): void {
    this.passed.set(this.raw.subarray(from, this.held), from);
    runCascade(this.forward, this.passed, from, this.held);
    flushCascade(this.forward);
  }

  /** The pass back over all of `work`, of which the first `count` samples are out then. */
  private release(count: number, work: Float64Array): Float64Array {
    work.reverse();
    runCascade(createCascade(this.sections), work, 0, work.length);
    work.reverse();
    this.raw.copyWithin(0, count, this.held);
    this.passed.copyWithin(0, count, this.held);
    this.held -= count;
    return work.slice(0, count);
  }
}

function joined(parts: readonly Float64Array[]): Float64Array {
  const [first] = parts;
  if (first && parts.length === 1) return first;
  const all = new Float64Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    all.set(part, at);
    at += part.length;
  }
  return all;
}

function widened(old: Float64Array<ArrayBuffer>, needed: number): Float64Array<ArrayBuffer> {
  const wider = new Float64Array(Math.max(needed, 2 * old.length));
  wider.set(old);
  return wider;
}
