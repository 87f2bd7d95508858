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
import {
  createEdgeColumns,
  createEdgeQueue,
  createRejectedColumns,
  delayGuessed,
  pushRejected,
  roomForEdge,
  roomInQueue,
} from '@/signal/columns';
import type { EdgeQueue } from '@/signal/columns';
import { createDetector, forgetState, runDetector, setThresholds, zones } from '@/signal/detector';
import type { Detector, DetectorSink } from '@/signal/detector';
import type { Section } from '@/signal/filter-design';
import { createHunter, hunt, startHunt, swingFloorV } from '@/signal/hunter';
import type { Hunter } from '@/signal/hunter';
import { createLevels, fittedThresholds, followed } from '@/signal/levels';
import type { Levels } from '@/signal/levels';
import { createMarginMeter, endTooth, noteMargin, worstMarginV } from '@/signal/margin-meter';
import type { MarginMeter } from '@/signal/margin-meter';
import type { Band, Channel, SampleArray } from '@/signal/model';
import { breakBurst, burstLength, createNoiseMeter, endBurst, rawNoiseV } from '@/signal/noise';
import type { NoiseMeter } from '@/signal/noise';
import { edgeRising } from '@/signal/pipeline-types';
import type { BandChange, EdgeColumns, RejectedColumns } from '@/signal/pipeline-types';
import { createRailMeter, railStride, watchRails } from '@/signal/rail-meter';
import type { RailMeter } from '@/signal/rail-meter';
import { createDelayCurve, dcDelayS, delayAt, noiseGain } from '@/signal/response';
import type { DelayCurve } from '@/signal/response';
import { holdsCodes, scaleOf, toVolts } from '@/signal/scale';

/** Most samples that one call of `advanceChannel` takes. */
export const chunkSamples = 1024;

const fewestForNoise = 8;

/** While levels are sought for the first time, so much signal is kept, so that its edges are found afterwards. */
const rememberedS = 5;
const mostRemembered = 65_536;
const quietS = 1;

export class ChannelPath implements DetectorSink {
  readonly channel: Channel;
  readonly edges: EdgeColumns = createEdgeColumns();
  readonly rejectedMarks: RejectedColumns = createRejectedColumns();
  readonly queue: EdgeQueue = createEdgeQueue();
  readonly levels: Levels = createLevels();
  readonly marginMeter: MarginMeter;
  readonly noise: NoiseMeter = createNoiseMeter();
  rails: RailMeter | null = null;
  /** Rms of the filtered signal's noise, V, as of the last tick; NaN: not known. */
  noiseV = NaN;
  edgeCount = 0;
  rejectedCount = 0;
  duty = NaN;
  delayS = NaN;
  /** Last accepted edge, samples, delay not taken off. */
  lastEdgeAt = NaN;
  /** Least and most raw volts of every thirty-second sample since `restartSpread`. */
  spreadLowV = Infinity;
  spreadHighV = -Infinity;

  private readonly band: Band;
  private readonly rateHz: number;
  private readonly missing: number;
  private readonly oneTooth: boolean;
  private readonly bands: BandChange[];
  private readonly cascade: Cascade;
  private readonly gainOfNoise: number;
  private readonly fromCodes: boolean;
  private readonly delays: DelayCurve;
  private readonly detector: Detector;
  private readonly hunter: Hunter = createHunter();
  /** `scratch[0]` is the sample before the chunk. */
  private readonly scratch = new Float64Array(chunkSamples + 1);
  private readonly burstEvery: number;
  /** Constructor of the arrays that come, and what turns their samples into volts. */
  private kind: unknown = null;
  private scale = { offset: 0, factor: 1 };
  private fresh = true;
  private hunting = false;
  private replaying = false;
  private remembered: Float64Array | null = null;
  private rememberedCount = 0;
  private rememberedBase = 0;
  private nextAt: number;
  private delayKnown = false;
  private periodSamples = NaN;
  private lastExtremeV = NaN;
  private wobbleV = NaN;
  private riseMidAt = NaN;
  private fallMidAt = NaN;
  private riseSpent = NaN;
  private fallSpent = NaN;

  constructor(options: {
    channel: Channel;
    band: Band;
    sections: readonly Section[];
    rateHz: number;
    startIndex: number;
    holdoffS: number;
    missingPulses: number;
    teethPerTurn: number;
    bands: BandChange[];
  }) {
    const { channel, band, sections, rateHz, startIndex } = options;
    this.channel = channel;
    this.band = band;
    this.rateHz = rateHz;
    this.missing = options.missingPulses;
    this.oneTooth = options.teethPerTurn === 1;
    this.bands = options.bands;
    this.cascade = createCascade(sections);
    this.fromCodes = takesCodes(this.cascade);
    this.gainOfNoise = noiseGain(sections, rateHz);
    this.delays = createDelayCurve(sections, rateHz);
    this.delayS = dcDelayS(sections, rateHz);
    this.wobbleV = 0;
    this.detector = createDetector(options.holdoffS * rateHz, band.mode === 'fitted');
    this.marginMeter = createMarginMeter(options.teethPerTurn);
    this.burstEvery = 2 ** Math.floor(Math.log2(Math.min(4096, Math.max(32, rateHz / 8))));
    this.nextAt = startIndex;
    if (band.mode === 'fixed') {
      const levels = band.channels?.[channel.name] ?? band;
      this.applyThresholds(levels.operateV, levels.releaseV, startIndex);
    } else {
      this.huntFromNothing();
    }
  }

  get operateV(): number {
    return this.detector.operateV;
  }

  get releaseV(): number {
    return this.detector.releaseV;
  }

  /** How long after its mid crossing an edge is known: the filter's delay and the way to the switching point, s. */
  get latencyS(): number {
    const spent = Math.max(this.riseSpent || 0, this.fallSpent || 0);
    return Math.max(0, this.delayS || 0) + (spent + 1) / this.rateHz;
  }

  /** Every edge up to this sample has been found, s. */
  get decidedUpTo(): number {
    return this.remembered ? this.rememberedBase : this.nextAt - 1;
  }

  get worstMarginV(): number {
    return worstMarginV(this.marginMeter);
  }

  /** Takes `array[from..to)`, at most `chunkSamples` of them; the first is sample `at` of the stream. */
  advance(array: SampleArray, from: number, to: number, at: number): void {
    const n = to - from;
    const v = this.scratch;
    const base = at - 1;
    if (array.constructor !== this.kind) this.learnKind(array);
    this.watchRaw(array, from, to, at);
    if (array instanceof Int16Array && this.fromCodes) {
      const { codeOffset, voltsPerCode } = this.channel;
      runCascadeFromInt16(this.cascade, array, from, to, codeOffset, voltsPerCode, v, 1);
    } else {
      toVolts(array, from, to, this.channel, v, 1);
      runCascade(this.cascade, v, 1, n + 1);
    }
    if (this.fresh) {
      v[0] = v[1]!;
      this.fresh = false;
    }
    let j = 1;
    while (j <= n) {
      if (this.hunting) {
        j = this.huntOn(v, j, n, base);
      } else {
        j = runDetector(this.detector, v, j, n, base, this);
        if (this.detector.edges.count > 0) this.takeEdges();
        if (j <= n && base + j >= this.detector.pauseAt) this.huntAgain(base + j);
      }
    }
    v[0] = v[n]!;
    this.nextAt = at + n;
  }

  /** Samples were lost: `at` is the index of the next one to come. */
  skipTo(at: number): void {
    resetCascade(this.cascade);
    breakBurst(this.noise);
    forgetState(this.detector);
    this.fresh = true;
    this.nextAt = at;
    this.riseMidAt = this.fallMidAt = this.lastExtremeV = NaN;
    if (this.rails) this.rails.previousV = NaN;
    if (this.band.mode === 'fixed') return;
    if (Number.isNaN(this.levels.lowV)) {
      this.huntFromNothing();
    } else {
      this.hunting = false;
      this.detector.pauseAt = at + 2 * this.rateHz;
    }
  }

  /** At fixed places of the stream: what was learnt about noise since the last one takes effect. */
  tick(): void {
    flushCascade(this.cascade);
    this.forgetQuiet();
    // With fewer samples a period the differences hold more signal than noise.
    this.noiseV = this.periodSamples < fewestForNoise ? NaN : rawNoiseV(this.noise) * this.gainOfNoise;
  }

  /**
   * Takes over what the detector recorded: levels, timing, error and output of each edge. One function over locals on
   * purpose, see `detector.ts` on boxed numbers.
   */
  private takeEdges(): void {
    const { detector, levels, edges, queue, rateHz, noiseV, delays, marginMeter } = this;
    const raw = detector.edges;
    const { operateV, releaseV } = detector;
    const halfBandV = operateV - detector.midV;
    let { lowV, highV } = levels;
    let { duty, wobbleV, lastExtremeV, riseMidAt, fallMidAt, riseSpent, fallSpent, periodSamples, delayS } =
      this;
    for (let k = 0; k < raw.count; k++) {
      const at = raw.at[k]!;
      const midAt = raw.midAt[k]!;
      const extremeV = raw.extremeV[k]!;
      const flags = raw.flags[k]!;
      const rising = (flags & edgeRising) !== 0;
      const beyondV = rising ? releaseV - extremeV : extremeV - operateV;
      if (beyondV < marginMeter.thisTurnV) marginMeter.thisTurnV = beyondV;
      if (!rising) endTooth(marginMeter);

      const toothV = Math.abs(extremeV - lastExtremeV);
      const swingV = highV - lowV;
      lastExtremeV = extremeV;
      if (!(toothV < swingV / 2)) wobbleV *= 0.97;
      else if (this.oneTooth && toothV > wobbleV) wobbleV = toothV;
      if (rising) lowV = followed(lowV, extremeV, swingV, toothV);
      else highV = followed(highV, extremeV, swingV, toothV);

      const before = rising ? riseMidAt : fallMidAt;
      if (rising) {
        if (fallMidAt > before) {
          const high = (fallMidAt - before) / (midAt - before);
          duty = Number.isNaN(duty) ? high : duty + (high - duty) / 8;
        }
        riseMidAt = midAt;
      } else {
        fallMidAt = midAt;
      }
      if (midAt > before) {
        const period = midAt - before;
        const gap = this.missing > 0 && spansGap(period / periodSamples, this.missing + 1);
        periodSamples = gap ? period / (this.missing + 1) : period;
        delayS = delayAt(delays, rateHz / periodSamples);
        this.delayKnown = true;
      }

      // Noise over the flank's slope, which is half the band over the time from mid to the switching point (a step between
      // two samples would hold more noise than slope on a gentle flank); no better than the sample grid on a steep one.
      let spent = rising ? riseSpent : fallSpent;
      if (at > midAt) spent = Number.isNaN(spent) ? at - midAt : spent + (at - midAt - spent) / 8;
      if (rising) riseSpent = spent;
      else fallSpent = spent;
      const noise = (noiseV * spent) / halfBandV;
      const grid = raw.midStepV[k]! > swingV / 2 ? 1 / 12 : 0;

      const i = roomForEdge(edges);
      edges.t[i] = at / rateHz - delayS;
      edges.midT[i] = midAt / rateHz - delayS;
      edges.flags[i] = flags;
      const q = roomInQueue(queue);
      queue.at[q] = at;
      queue.midS[q] = midAt / rateHz;
      queue.delayS[q] = delayS;
      queue.sigmaS[q] = Math.sqrt(noise * noise + grid) / rateHz;
      queue.extremeV[q] = extremeV;
      queue.flags[q] = flags | (this.delayKnown ? 0 : delayGuessed);
    }
    this.edgeCount += raw.count;
    this.lastEdgeAt = raw.at[raw.count - 1]!;
    raw.count = 0;
    levels.lowV = lowV;
    levels.highV = highV;
    this.duty = duty;
    this.wobbleV = wobbleV;
    this.lastExtremeV = lastExtremeV;
    this.riseMidAt = riseMidAt;
    this.fallMidAt = fallMidAt;
    this.riseSpent = riseSpent;
    this.fallSpent = fallSpent;
    this.periodSamples = periodSamples;
    this.delayS = delayS;
    if (this.band.mode === 'fixed') return;
    this.refit(this.lastEdgeAt / rateHz - delayS);
    detector.pauseAt = this.replaying ? Infinity : Math.ceil(this.lastEdgeAt + this.quietSamples());
  }

  rejected(at: number, reachV: number, rising: boolean): void {
    // Edges before it come first: their delay is the one to take off here.
    if (this.detector.edges.count > 0) this.takeEdges();
    this.rejectedCount++;
    pushRejected(this.rejectedMarks, at / this.rateHz - this.delayS);
    if (Number.isNaN(reachV)) return;
    noteMargin(this.marginMeter, rising ? reachV - this.detector.operateV : this.detector.releaseV - reachV);
  }

  restartSpread(): void {
    this.spreadLowV = Infinity;
    this.spreadHighV = -Infinity;
  }

  /** A few raw samples: bursts for the noise, every thirty-second for rails and spread. Takes `array[from..to)`, stream index `at`. */
  private watchRaw(array: SampleArray, from: number, to: number, at: number): void {
    this.feedNoise(array, from, to, at);
    const { rails, scale } = this;
    for (let i = from + ((railStride - (at % railStride)) % railStride); i < to; i += railStride) {
      const x = (array[i]! - scale.offset) * scale.factor;
      if (x < this.spreadLowV) this.spreadLowV = x;
      if (x > this.spreadHighV) this.spreadHighV = x;
      if (rails) watchRails(rails, x, at + (i - from));
    }
  }

  /** A tooth passed without reaching mid, so that its peak stood at least so far below the operate point. */
  toothMissed(): void {
    noteMargin(this.marginMeter, this.detector.midV - this.detector.operateV);
  }

  wobble(backV: number): void {
    if (backV > this.wobbleV) this.wobbleV = backV;
  }

  private learnKind(array: SampleArray): void {
    this.kind = array.constructor;
    this.scale = scaleOf(array, this.channel);
    const codes = holdsCodes(array);
    this.rails = createRailMeter(this.channel, codes);
    if (!codes) return;
    this.noise.quantumV = Math.abs(this.channel.voltsPerCode);
    this.noise.quantumFixed = true;
  }

  private feedNoise(array: SampleArray, from: number, to: number, at: number): void {
    const { burstEvery, noise, scale } = this;
    let phase = at % burstEvery;
    let i = from;
    while (i < to) {
      // A burst whose begin was not seen is left out.
      if (phase < burstLength && (phase === 0 || noise.filled === phase)) {
        const end = Math.min(to, i + burstLength - phase);
        if (phase === 0) noise.filled = 0;
        phase += end - i;
        for (; i < end; i++) noise.burst[noise.filled++] = (array[i]! - scale.offset) * scale.factor;
        if (noise.filled === burstLength) endBurst(noise);
      } else {
        i += burstEvery - phase;
        phase = 0;
      }
    }
  }

  /** Thresholds move once they are off by 2 % of the swing; a smaller step is neither made nor reported. */
  private refit(t: number): void {
    if (this.band.mode !== 'fitted') return;
    const { operateV, releaseV } = fittedThresholds(this.levels, this.band, this.noiseV, this.wobbleV);
    const tolerance = 0.02 * (this.levels.highV - this.levels.lowV);
    const { detector } = this;
    if (
      Math.abs(operateV - detector.operateV) <= tolerance &&
      Math.abs(releaseV - detector.releaseV) <= tolerance
    )
      return;
    setThresholds(detector, operateV, releaseV);
    this.bands.push({ channel: this.channel.name, t, operateV, releaseV });
  }

  private applyThresholds(operateV: number, releaseV: number, at: number): void {
    setThresholds(this.detector, operateV, releaseV);
    this.bands.push({ channel: this.channel.name, t: at / this.rateHz, operateV, releaseV });
  }

  /** So long without an edge, and the levels are looked at again, samples. */
  private quietSamples(): number {
    if (Number.isNaN(this.periodSamples)) return 2 * this.rateHz;
    return Math.max(64, 4 * (this.missing + 1) * this.periodSamples);
  }

  private huntFromNothing(): void {
    this.hunting = true;
    this.remembered = new Float64Array(256);
    this.rememberedCount = 0;
    this.rememberedBase = this.nextAt - 1;
    startHunt(this.hunter, this.nextAt, 0);
  }

  private huntAgain(at: number): void {
    this.hunting = true;
    startHunt(this.hunter, at, (this.levels.highV - this.levels.lowV) / 4);
  }

  /** Hunting and, where levels are known, the old band side by side; an accepted edge ends the hunt. */
  private huntOn(v: Float64Array, from: number, to: number, base: number): number {
    const { hunter, detector } = this;
    const stop = hunt(
      hunter,
      v,
      from,
      to,
      base,
      this.noiseV,
      this.noise.quantumV,
      Math.max(64, 2 * this.rateHz),
    );
    const found = hunter.found;
    if (!Number.isNaN(detector.operateV)) {
      detector.pauseAt = Infinity;
      const next = runDetector(detector, v, from, stop, base, this);
      if (detector.edges.count > 0) {
        this.takeEdges();
        this.hunting = false;
        return next;
      }
    }
    this.remember(v, from, stop);
    if (found) this.adopt(v, stop, base);
    return stop + 1;
  }

  private remember(v: Float64Array, from: number, to: number): void {
    let kept = this.remembered;
    if (!kept) return;
    const most = Math.min(mostRemembered, Math.max(256, Math.ceil(rememberedS * this.rateHz)));
    const count = this.rememberedCount + (to - from + 1);
    if (count > most) {
      this.remembered = null;
      return;
    }
    if (this.rememberedCount === 0) kept[0] = v[from - 1]!;
    while (count + 1 > kept.length) {
      const wider: Float64Array = new Float64Array(kept.length * 2);
      wider.set(kept);
      kept = wider;
    }
    kept.set(v.subarray(from, to + 1), this.rememberedCount + 1);
    this.remembered = kept;
    this.rememberedCount = count;
  }

  /** Where nothing has swung yet for a second, no edge can be found there later: what was remembered of it may go. */
  private forgetQuiet(): void {
    const { hunter, remembered } = this;
    if (!remembered || this.rememberedCount < quietS * this.rateHz || hunter.turnCount > 0) return;
    if (!(hunter.highV - hunter.lowV <= swingFloorV(hunter, this.noiseV, this.noise.quantumV))) return;
    this.rememberedCount = 0;
    this.rememberedBase = this.nextAt - 1;
  }

  private adopt(v: Float64Array, at: number, base: number): void {
    const { hunter, detector, levels } = this;
    if (this.band.mode !== 'fitted') return;
    this.hunting = false;
    levels.lowV = hunter.foundLowV;
    levels.highV = hunter.foundHighV;
    // Nothing is known of the flanks yet: begin wide, and let whole teeth narrow it.
    this.wobbleV = (levels.highV - levels.lowV) / 4;
    const { operateV, releaseV } = fittedThresholds(levels, this.band, this.noiseV, this.wobbleV);
    forgetState(detector);
    if (this.remembered) {
      this.applyThresholds(operateV, releaseV, this.rememberedBase + 1);
      this.replaying = true;
      detector.pauseAt = Infinity;
      for (let j = 1; j <= this.rememberedCount;) {
        j = runDetector(detector, this.remembered, j, this.rememberedCount, this.rememberedBase, this);
        if (detector.edges.count > 0) this.takeEdges();
      }
      this.replaying = false;
      this.remembered = null;
    } else {
      this.applyThresholds(operateV, releaseV, base + at);
      this.placeState(v[at]!);
    }
    detector.pauseAt = Math.ceil(base + at + this.quietSamples());
  }

  /** The hunter has seen on which side of the new band the signal was last. */
  private placeState(x: number): void {
    const { hunter, detector } = this;
    const low = x < detector.releaseV || (x <= detector.operateV && hunter.heading > 0);
    if (low) detector.zone = x > detector.midV ? zones.lowUp : zones.low;
    else detector.zone = x < detector.midV ? zones.highDown : zones.high;
    detector.extremeV = low ? Math.min(x, this.levels.lowV) : Math.max(x, this.levels.highV);
    detector.reachV = x;
  }
}

/** Across the gap of the wheel the teeth's frequency is what the filter sees before and after it. */
function spansGap(ratio: number, whole: number): boolean {
  return ratio > Math.sqrt(whole) && ratio < whole * Math.sqrt(whole);
}
