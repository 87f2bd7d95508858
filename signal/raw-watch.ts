/**
 * What is learnt from a few raw samples only, so that it costs next to nothing: the noise from short bursts, rails and
 * spread from every thirty-second sample (of slow streams from more, 250 a second where there are as many). Which samples
 * these are follows from their place in the stream.
 */
import type { Channel, SampleArray } from '@/signal/model';
import { breakBurst, burstLength, createNoiseMeter, endBurst } from '@/signal/noise';
import type { NoiseMeter } from '@/signal/noise';
import { breakRails, createRailMeter, leaveRails, touchesRails, watchRails } from '@/signal/rail-meter';
import type { RailMeter } from '@/signal/rail-meter';
import { holdsCodes, scaleOf } from '@/signal/scale';
import { createSlowRing } from '@/signal/slow-ring';
import type { SlowRing } from '@/signal/slow-ring';
import { samplesPerTick } from '@/signal/ticks';

const burstsOfStart = 41;

export class RawWatch {
  readonly noise: NoiseMeter = createNoiseMeter();
  rails: RailMeter | null = null;
  /** As the path's own slow ring, before the filter; kept only while it is asked for. */
  ring: SlowRing | null = null;
  /** Least and most volts of the samples looked at since `restartSpread`. */
  spreadLowV = Infinity;
  spreadHighV = -Infinity;
  private readonly channel: Channel;
  private readonly rateHz: number;
  private readonly stride: number;
  /** A burst begins at every multiple of so many samples. */
  private burstEvery: number;
  private readonly burstEveryLater: number;
  /** Constructor of the arrays that come, and what turns their samples into volts. */
  private kind: unknown = null;
  private scale = { offset: 0, factor: 1 };
  /** Least and most sample of a chunk, as they came. */
  private readonly ends = new Float64Array(2);

  constructor(channel: Channel, rateHz: number) {
    this.channel = channel;
    this.rateHz = rateHz;
    this.stride = 2 ** Math.min(5, Math.max(0, Math.floor(Math.log2(rateHz / 250))));
    this.burstEveryLater = powerOfTwo(Math.min(4096, Math.max(32, rateHz / 8)));
    // Until the first tick there must be enough of them to judge by, as many as there can be.
    this.burstEvery = Math.min(
      this.burstEveryLater,
      powerOfTwo(Math.max(32, samplesPerTick(rateHz) / burstsOfStart)),
    );
  }

  restartSpread(): void {
    this.spreadLowV = Infinity;
    this.spreadHighV = -Infinity;
  }

  /** Raw samples are kept from here on, or no longer. */
  keepRing(on: boolean): void {
    if (on === (this.ring !== null)) return;
    this.ring = on ? createSlowRing(this.rateHz) : null;
  }

  /** Samples were lost. */
  gap(): void {
    breakBurst(this.noise);
    if (this.ring) this.ring.unbrokenFrom = this.ring.count;
    if (this.rails) breakRails(this.rails);
  }

  /** Takes `array[from..to)`; the first is sample `at` of the stream. */
  take(array: SampleArray, from: number, to: number, at: number): void {
    if (array.constructor !== this.kind) this.learnKind(array);
    this.feedNoise(array, from, to, at);
    if (this.ring) this.feedRing(this.ring, array, from, to, at);
    const { ends, rails, stride } = this;
    const first = from + ((stride - (at % stride)) % stride);
    if (first >= to) return;
    const { offset, factor } = this.scale;
    if (array instanceof Int16Array) endsOfCodes(array, first, to, stride, ends);
    else endsOf(array, first, to, stride, ends);
    const a = (ends[0]! - offset) * factor;
    const b = (ends[1]! - offset) * factor;
    const lowV = a < b ? a : b;
    const highV = a < b ? b : a;
    if (lowV < this.spreadLowV) this.spreadLowV = lowV;
    if (highV > this.spreadHighV) this.spreadHighV = highV;
    if (!rails) return;
    if (touchesRails(rails, lowV, highV)) {
      for (let i = first; i < to; i += stride)
        watchRails(rails, (array[i]! - offset) * factor, at + (i - from));
    } else {
      rails.checked += Math.ceil((to - first) / stride);
      leaveRails(rails, at + (first - from));
    }
  }

  private learnKind(array: SampleArray): void {
    this.kind = array.constructor;
    this.scale = scaleOf(array, this.channel);
    const codes = holdsCodes(array);
    this.rails = createRailMeter(this.channel, codes, this.rateHz);
    if (!codes) return;
    this.noise.quantumV = Math.abs(this.channel.voltsPerCode);
    this.noise.quantumFixed = true;
  }

  private feedRing(ring: SlowRing, array: SampleArray, from: number, to: number, at: number): void {
    const { offset, factor } = this.scale;
    const { stride, mask, v } = ring;
    let kept = ring.count;
    for (let i = from + ((stride - (at % stride)) % stride); i < to; i += stride)
      v[kept++ & mask] = (array[i]! - offset) * factor;
    ring.count = kept;
  }

  private feedNoise(array: SampleArray, from: number, to: number, at: number): void {
    const { noise, scale } = this;
    let phase = at % this.burstEvery;
    let i = from;
    while (i < to) {
      // A burst whose begin was not seen is left out.
      if (phase < burstLength && (phase === 0 || noise.filled === phase)) {
        const end = Math.min(to, i + burstLength - phase);
        if (phase === 0) noise.filled = 0;
        phase += end - i;
        for (; i < end; i++) noise.burst[noise.filled++] = (array[i]! - scale.offset) * scale.factor;
        if (noise.filled === burstLength) {
          endBurst(noise);
          if (noise.seen === burstsOfStart) {
            this.burstEvery = this.burstEveryLater;
            phase = (at + (i - from)) % this.burstEvery;
          }
        }
      } else {
        i += this.burstEvery - phase;
        phase = 0;
      }
    }
  }
}

/** Of the commonest kind, apart from the others: a loop that sees several kinds of array is slow, and whole numbers are quick. */
function endsOfCodes(array: Int16Array, first: number, to: number, stride: number, ends: Float64Array): void {
  let least = array[first]!;
  let most = least;
  for (let i = first + stride; i < to; i += stride) {
    const x = array[i]!;
    if (x < least) least = x;
    else if (x > most) most = x;
  }
  ends[0] = least;
  ends[1] = most;
}

function endsOf(array: SampleArray, first: number, to: number, stride: number, ends: Float64Array): void {
  let least = array[first]!;
  let most = least;
  for (let i = first + stride; i < to; i += stride) {
    const x = array[i]!;
    if (x < least) least = x;
    else if (x > most) most = x;
  }
  ends[0] = least;
  ends[1] = most;
}

function powerOfTwo(value: number): number {
  return 2 ** Math.floor(Math.log2(value));
}
