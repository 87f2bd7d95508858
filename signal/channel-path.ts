/**
 * One channel from samples to edges: scale, filter, band, edges with both instants, and what is learnt on the way
 * (levels, noise, duty, margin). Everything is decided from samples in their order, never from where a block ended.
 */
import type { BandKeeper } from '@/signal/band-keeper';
import {
  createCascade,
  flushCascade,
  resetCascade,
  runCascade,
  runCascadeFromInt16,
  takesCodes,
} from '@/signal/biquad';
import type { Cascade } from '@/signal/biquad';
import type { EdgeQueue } from '@/signal/columns';
import type { DelayCurve } from '@/signal/delay-curve';
import type { Section } from '@/signal/filter-design';
import { FittedBand } from '@/signal/fitted-band';
import { FixedBand } from '@/signal/fixed-band';
import type { Levels } from '@/signal/levels';
import { worstMarginV } from '@/signal/margin-meter';
import type { Band, Channel, SampleArray } from '@/signal/model';
import { mostNoiseV, mostQuantumV, rawNoiseV } from '@/signal/noise';
import type { NoiseMeter } from '@/signal/noise';
import type { BandChange, EdgeColumns, RejectedColumns } from '@/signal/pipeline-types';
import type { RailMeter } from '@/signal/rail-meter';
import { RawWatch } from '@/signal/raw-watch';
import { toVolts } from '@/signal/scale';
import { createSlowRing, keepSlow } from '@/signal/slow-ring';
import type { SlowRing } from '@/signal/slow-ring';
import type { ToothLog } from '@/signal/tooth-log';

/** Most samples that one call of `advance` takes. */
export const chunkSamples = 1024;

const fewestForNoise = 8;
/** Of the supply. */
const switchingShare = 0.2;
const linearShare = 0.003;

export type PathOptions = {
  channel: Channel;
  band: Band;
  sections: readonly Section[];
  /** What the filter leaves of white noise, `noiseGain`. */
  gainOfNoise: number;
  rateHz: number;
  startIndex: number;
  holdoffS: number;
  missingPulses: number;
  teethPerTurn: number;
  /** Between neighbouring samples of the filtered noise; where not given, as the sections make it of white noise. */
  correlation?: number | undefined;
  /** Delays of these sections, where another channel has them already. */
  delays?: DelayCurve | undefined;
  /** Edges may be found so long after they passed; 0, or not given: other channels' edges count in order with them. */
  findLateS?: number;
  bands: BandChange[];
};

export class ChannelPath {
  readonly channel: Channel;
  readonly slow: SlowRing;
  /** Filtered volts of the last chunk, from index 1 on; index 0 is the sample before it. */
  readonly filtered = new Float64Array(chunkSamples + 1);
  private readonly cascade: Cascade;
  private readonly gainOfNoise: number;
  private readonly fromCodes: boolean;
  private readonly keeper: BandKeeper;
  private readonly watch: RawWatch;
  private fresh = true;
  private nextAt: number;

  constructor(options: PathOptions) {
    const { channel, band, sections, rateHz, startIndex } = options;
    this.channel = channel;
    this.cascade = createCascade(sections);
    this.fromCodes = takesCodes(this.cascade);
    this.gainOfNoise = options.gainOfNoise;
    const { findLateS = 0 } = options;
    const common = {
      ...options,
      findLateS,
      channelName: channel.name,
      chunk: chunkSamples,
      leastFirstV: leastFirstV(channel),
    };
    this.keeper =
      band.mode === 'fixed' ? new FixedBand({ ...common, band }) : new FittedBand({ ...common, band });
    this.watch = new RawWatch(channel, rateHz);
    this.slow = createSlowRing(rateHz);
    this.nextAt = startIndex;
  }

  get levels(): Levels {
    return this.keeper.levels;
  }

  /** Rms of the filtered signal's noise, V, as of the last tick; NaN: not known. */
  get noiseV(): number {
    return this.keeper.noiseV;
  }

  get rejectedMarks(): RejectedColumns {
    return this.keeper.rejectedMarks;
  }

  get rejectedCount(): number {
    return this.keeper.rejectedCount;
  }

  /** Those within a quarter of a period after an edge. */
  get keptBackCount(): number {
    return this.keeper.keptBackCount;
  }

  get edges(): EdgeColumns {
    return this.keeper.intake.edges;
  }

  get queue(): EdgeQueue {
    return this.keeper.intake.queue;
  }

  get log(): ToothLog {
    return this.keeper.intake.log;
  }

  get edgeCount(): number {
    return this.keeper.intake.edgeCount;
  }

  get duty(): number {
    return this.keeper.intake.duty;
  }

  get delayS(): number {
    return this.keeper.intake.delayS;
  }

  get latencyS(): number {
    return this.keeper.intake.latencyS;
  }

  get rails(): RailMeter | null {
    return this.watch.rails;
  }

  /** What bursts of neighbouring raw samples say; the last one is whole where `filled` is 0. */
  get bursts(): NoiseMeter {
    return this.watch.noise;
  }

  /** As `slow`, before the filter; null while it is not kept. */
  get rawSlow(): SlowRing | null {
    return this.watch.ring;
  }

  keepRawSlow(on: boolean): void {
    this.watch.keepRing(on);
  }

  /** Crossings of the band within hold-offs that made no edge: of teeth, or of bounce. */
  get eatenCount(): number {
    return this.keeper.detector.eatenCount;
  }

  /** Least and most raw volts of every thirty-second sample since `restartSpread`. */
  get spreadLowV(): number {
    return this.watch.spreadLowV;
  }

  get spreadHighV(): number {
    return this.watch.spreadHighV;
  }

  restartSpread(): void {
    this.watch.restartSpread();
  }

  get operateV(): number {
    return this.keeper.detector.operateV;
  }

  get releaseV(): number {
    return this.keeper.detector.releaseV;
  }

  /** Every edge up to this sample has been found. */
  get decidedUpTo(): number {
    const waiting = this.keeper.decidedUpTo;
    return Number.isNaN(waiting) ? this.nextAt - 1 : waiting;
  }

  get worstMarginV(): number {
    return worstMarginV(this.keeper.intake.marginMeter);
  }

  /**
   * Takes `array[from..to)`, at most `chunkSamples` of them; the first is sample `at` of the stream.
   * @param filtered the same samples filtered already, V: the path's own filter is left out.
   */
  advance(array: SampleArray, from: number, to: number, at: number, filtered?: Float64Array): void {
    const { cascade, filtered: v } = this;
    const n = to - from;
    if (filtered) {
      v.set(filtered.subarray(from, to), 1);
    } else if (this.fromCodes && array instanceof Int16Array) {
      const { codeOffset, voltsPerCode } = this.channel;
      runCascadeFromInt16(cascade, array, from, to, codeOffset, voltsPerCode, v, 1);
    } else {
      toVolts(array, from, to, this.channel, v, 1);
      runCascade(cascade, v, 1, n + 1);
    }
    // After the filter, which reads in order: skipping through samples that are in no cache yet is slow.
    this.watch.take(array, from, to, at);
    keepSlow(this.slow, v, 1, n, at);
    if (this.fresh) {
      v[0] = v[1]!;
      this.fresh = false;
    }
    this.nextAt = at + n;
    this.keeper.run(v, 1, n, at - 1);
    v[0] = v[n]!;
  }

  /** Samples were lost: `at` is the index of the next one to come. */
  skipTo(at: number): void {
    resetCascade(this.cascade);
    this.watch.gap();
    this.slow.unbrokenFrom = this.slow.count;
    this.fresh = true;
    this.nextAt = at;
    this.keeper.gap(at);
  }

  /** At fixed places of the stream: what was learnt about noise since the last one takes effect. */
  tick(): void {
    const { noise } = this.watch;
    flushCascade(this.cascade);
    // With fewer samples a period the differences hold more signal than noise.
    const known = !(this.keeper.intake.periodSamples < fewestForNoise);
    const gain = known ? this.gainOfNoise : NaN;
    this.keeper.tick(this.nextAt, gain * rawNoiseV(noise), gain * mostNoiseV(noise), mostQuantumV(noise));
  }

  /** A tooth that was due did not come. */
  toothMissed(): void {
    this.keeper.toothMissed();
  }
}

/**
 * What swings less, at first, is no teeth. The output of a switching sensor is nearly all of its supply: less is noise that
 * stands at a rail with half of it cut off, which passes for less than it is. That of a linear one may be small, but hum
 * of a few thousandths of the supply is on many a line before the shaft turns.
 */
function leastFirstV({ sensor: { kind, supplyV } }: Channel): number {
  if (supplyV === null || !(supplyV > 0)) return 0;
  return (kind === 'linear' ? linearShare : switchingShare) * supplyV;
}
