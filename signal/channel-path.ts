/**
 * One channel from samples to edges: scale, filter, band, edges with both instants, and what is learnt on the way
 * (levels, noise, duty, margin). Everything is decided from samples in their order, never from where a block ended.
 */
import {
  createCascade,
  flushCascade,
  resetCascade,
  runCascade,
  runCascadeFromInt16,
  takesCodes,
} from '@/signal/biquad';
import type { Cascade } from '@/signal/biquad';
import { createRejectedColumns, pushRejected } from '@/signal/columns';
import type { EdgeQueue } from '@/signal/columns';
import { runDetector } from '@/signal/detector';
import { createDetector, forgetState, setThresholds } from '@/signal/detector-state';
import type { Detector } from '@/signal/detector-state';
import { EdgeIntake } from '@/signal/edge-intake';
import type { Section } from '@/signal/filter-design';
import { LevelFinder } from '@/signal/level-finder';
import type { FinderHost } from '@/signal/level-finder';
import { createLevels, fittedThresholds } from '@/signal/levels';
import type { Levels } from '@/signal/levels';
import { noteMargin, worstMarginV } from '@/signal/margin-meter';
import type { Band, Channel, SampleArray } from '@/signal/model';
import { rawNoiseV } from '@/signal/noise';
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

export class ChannelPath implements FinderHost {
  readonly channel: Channel;
  readonly rejectedMarks: RejectedColumns = createRejectedColumns();
  readonly levels: Levels = createLevels();
  /** Rms of the filtered signal's noise, V, as of the last tick; NaN: not known. */
  noiseV = NaN;
  /** Smallest step between neighbouring values as of the last tick, V. */
  private quantumV = 0;
  rejectedCount = 0;
  /** Those within a quarter of a period after an edge: bounce that band or hold-off kept back. */
  keptBackCount = 0;
  readonly slow: SlowRing;

  private readonly band: Band;
  private readonly rateHz: number;
  private readonly missing: number;
  private readonly bands: BandChange[];
  private readonly cascade: Cascade;
  private readonly gainOfNoise: number;
  private readonly fromCodes: boolean;
  private readonly detector: Detector;
  private readonly intake: EdgeIntake;
  private readonly watch: RawWatch;
  private readonly finder: LevelFinder;
  /** `scratch[0]` is the sample before the chunk. */
  private readonly scratch = new Float64Array(chunkSamples + 1);
  private fresh = true;
  private nextAt: number;

  constructor(options: {
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
    bands: BandChange[];
  }) {
    const { channel, band, sections, rateHz, startIndex, missingPulses, teethPerTurn } = options;
    this.channel = channel;
    this.band = band;
    this.rateHz = rateHz;
    this.missing = missingPulses;
    this.bands = options.bands;
    this.cascade = createCascade(sections);
    this.fromCodes = takesCodes(this.cascade);
    this.gainOfNoise = options.gainOfNoise;
    this.detector = createDetector(options.holdoffS * rateHz, band.mode === 'fitted');
    this.intake = new EdgeIntake(this.detector, this.levels, sections, rateHz, missingPulses, teethPerTurn);
    this.watch = new RawWatch(channel, rateHz);
    this.slow = createSlowRing(rateHz);
    this.finder = new LevelFinder(this.detector, this.levels, rateHz, this);
    this.nextAt = startIndex;
    if (band.mode === 'fixed') {
      const { operateV, releaseV } = band.channels?.[channel.name] ?? band;
      this.moveBand(operateV, releaseV, startIndex / rateHz);
    } else {
      this.finder.startFromNothing(startIndex);
    }
  }

  /** Filtered volts of the last chunk, from index 1 on; index 0 is the sample before it. */
  get filtered(): Float64Array {
    return this.scratch;
  }

  get edges(): EdgeColumns {
    return this.intake.edges;
  }

  get queue(): EdgeQueue {
    return this.intake.queue;
  }

  get log(): ToothLog {
    return this.intake.log;
  }

  get edgeCount(): number {
    return this.intake.edgeCount;
  }

  get duty(): number {
    return this.intake.duty;
  }

  get delayS(): number {
    return this.intake.delayS;
  }

  get latencyS(): number {
    return this.intake.latencyS;
  }

  get rails(): RailMeter | null {
    return this.watch.rails;
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
    return this.detector.operateV;
  }

  get releaseV(): number {
    return this.detector.releaseV;
  }

  /** Every edge up to this sample has been found, s. */
  get decidedUpTo(): number {
    const waiting = this.finder.decidedUpTo;
    return Number.isNaN(waiting) ? this.nextAt - 1 : waiting;
  }

  get worstMarginV(): number {
    return worstMarginV(this.intake.marginMeter);
  }

  /**
   * Takes `array[from..to)`, at most `chunkSamples` of them; the first is sample `at` of the stream.
   * @param filtered the same samples filtered already, V: the path's own filter is left out.
   */
  advance(array: SampleArray, from: number, to: number, at: number, filtered?: Float64Array): void {
    const { detector, finder, watch } = this;
    const n = to - from;
    const v = this.scratch;
    const base = at - 1;
    if (filtered) {
      v.set(filtered.subarray(from, to), 1);
    } else if (this.fromCodes && array instanceof Int16Array) {
      const { codeOffset, voltsPerCode } = this.channel;
      runCascadeFromInt16(this.cascade, array, from, to, codeOffset, voltsPerCode, v, 1);
    } else {
      toVolts(array, from, to, this.channel, v, 1);
      runCascade(this.cascade, v, 1, n + 1);
    }
    // After the filter, which reads in order: skipping through samples that are in no cache yet is slow.
    watch.take(array, from, to, at);
    keepSlow(this.slow, v, 1, n, at);
    if (this.fresh) {
      v[0] = v[1]!;
      this.fresh = false;
    }
    let j = 1;
    while (j <= n) {
      if (finder.hunting) {
        j = finder.huntOn(v, j, n, base, this.quantumV);
      } else {
        j = runDetector(detector, v, j, n, base, this);
        if (detector.edges.count > 0) this.takeEdges();
        if (j <= n && base + j >= detector.pauseAt) finder.startAgain(base + j);
      }
    }
    v[0] = v[n]!;
    this.nextAt = at + n;
  }

  /** Samples were lost: `at` is the index of the next one to come. */
  skipTo(at: number): void {
    resetCascade(this.cascade);
    forgetState(this.detector);
    this.watch.gap();
    this.slow.unbrokenFrom = this.slow.count;
    this.intake.gap();
    this.fresh = true;
    this.nextAt = at;
    if (this.band.mode === 'fitted') this.finder.gap(at);
  }

  /** At fixed places of the stream: what was learnt about noise since the last one takes effect. */
  tick(): void {
    const { noise } = this.watch;
    flushCascade(this.cascade);
    this.quantumV = noise.quantumV;
    this.finder.forgetQuiet(this.nextAt, noise.quantumV);
    // With fewer samples a period the differences hold more signal than noise.
    this.noiseV = this.intake.periodSamples < fewestForNoise ? NaN : rawNoiseV(noise) * this.gainOfNoise;
  }

  takeEdges(): void {
    const { intake } = this;
    intake.take(this.noiseV);
    if (this.band.mode === 'fixed') return;
    this.refit(intake.lastEdgeAt / this.rateHz - intake.delayS);
    this.detector.pauseAt = this.finder.replaying
      ? Infinity
      : Math.ceil(intake.lastEdgeAt + this.quietSamples());
  }

  rejected(at: number, reachV: number, rising: boolean): void {
    // Edges before it come first: their delay is the one to take off here.
    if (this.detector.edges.count > 0) this.takeEdges();
    this.rejectedCount++;
    if (at - this.intake.lastEdgeAt < this.intake.periodSamples / 4) this.keptBackCount++;
    pushRejected(this.rejectedMarks, at / this.rateHz - this.intake.delayS);
    if (Number.isNaN(reachV)) return;
    const beyondV = rising ? reachV - this.detector.operateV : this.detector.releaseV - reachV;
    noteMargin(this.intake.marginMeter, beyondV);
  }

  wobble(backV: number): void {
    if (backV > this.levels.wobbleV) this.levels.wobbleV = backV;
  }

  /** A tooth passed without reaching mid, so that its peak stood at least so far below the operate point. */
  toothMissed(): void {
    noteMargin(this.intake.marginMeter, this.detector.midV - this.detector.operateV);
  }

  quietSamples(): number {
    const { periodSamples } = this.intake;
    return Number.isNaN(periodSamples)
      ? 2 * this.rateHz
      : Math.max(64, 4 * (this.missing + 1) * periodSamples);
  }

  fit(at: number): void {
    if (this.band.mode !== 'fitted') return;
    const { operateV, releaseV } = fittedThresholds(this.levels, this.band, this.noiseV);
    this.moveBand(operateV, releaseV, at / this.rateHz);
  }

  /** Thresholds move once they are off by 2 % of the swing; a smaller step is neither made nor reported. */
  private refit(t: number): void {
    if (this.band.mode !== 'fitted') return;
    const { detector, levels } = this;
    const { operateV, releaseV } = fittedThresholds(levels, this.band, this.noiseV);
    const tolerance = 0.02 * (levels.highV - levels.lowV);
    const operateStays = Math.abs(operateV - detector.operateV) <= tolerance;
    if (operateStays && Math.abs(releaseV - detector.releaseV) <= tolerance) return;
    this.moveBand(operateV, releaseV, t);
  }

  private moveBand(operateV: number, releaseV: number, t: number): void {
    setThresholds(this.detector, operateV, releaseV);
    this.bands.push({ channel: this.channel.name, t, operateV, releaseV });
  }
}
