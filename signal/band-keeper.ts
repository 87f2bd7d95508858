/**
 * What a fixed and a fitted band have in common: the detector over the channel's samples, what its edges teach, peaks that
 * were not counted, and the search for teeth in a stretch whose end came late.
 */
import { createRejectedColumns, pushRejected } from '@/signal/columns';
import { runDetector } from '@/signal/detector';
import { createDetector, forgetState, setThresholds } from '@/signal/detector-state';
import type { Detector, DetectorSink } from '@/signal/detector-state';
import { EdgeIntake } from '@/signal/edge-intake';
import type { IntakeOptions } from '@/signal/edge-intake';
import { LevelFinder } from '@/signal/level-finder';
import type { FinderHost } from '@/signal/level-finder';
import { createLevels } from '@/signal/levels';
import { noteMargin } from '@/signal/margin-meter';
import type { Band } from '@/signal/model';
import type { Past } from '@/signal/past';
import { edgeRising } from '@/signal/pipeline-types';
import type { BandChange } from '@/signal/pipeline-types';
import type { Remembered } from '@/signal/remembered';
import { longShare, WeakTeeth } from '@/signal/weak-teeth';

export type BandOptions<Kind extends Band = Band> = IntakeOptions & {
  channelName: string;
  band: Kind;
  startIndex: number;
  holdoffS: number;
  /** Samples of a chunk, at most. */
  chunk: number;
  /** While no levels are known, smaller swings are no teeth, V. */
  leastFirstV: number;
  bands: BandChange[];
};

export abstract class BandKeeper implements FinderHost, DetectorSink {
  abstract readonly isFixed: boolean;
  readonly detector: Detector;
  readonly intake: EdgeIntake;
  readonly levels = createLevels();
  readonly rejectedMarks = createRejectedColumns();
  rejectedCount = 0;
  /** Those within a quarter of a period after an edge: bounce that band or hold-off kept back. */
  keptBackCount = 0;
  /** Rms of the filtered signal's noise, V, as of the last tick; NaN: not known. */
  noiseV = NaN;
  /** What it may be at most, as far as can be told. */
  mostNoiseV = NaN;
  // Numbers begin as fractions: a field that was ever a whole number changes its layout later.
  /** Smallest step between neighbouring values as of the last tick, V; while none has been seen, the largest that it may be. */
  quantumV = NaN;
  protected readonly options: BandOptions;
  protected readonly finder: LevelFinder;
  protected readonly weak: WeakTeeth;
  /** What can be looked back at from where the scan is. */
  protected past: Past | null = null;
  /** The least that came where a tooth was due, of the last such place, V. */
  private emptyV = NaN;

  constructor(options: BandOptions) {
    const { band, holdoffS, rateHz, teethPerTurn, missingPulses } = options;
    this.options = options;
    this.detector = createDetector(holdoffS * rateHz, band.mode === 'fitted');
    this.intake = new EdgeIntake(this.detector, this.levels, options);
    this.weak = new WeakTeeth(teethPerTurn, missingPulses);
    this.finder = new LevelFinder(this.detector, this.levels, rateHz, this);
  }

  get leastFirstV(): number {
    return this.options.leastFirstV;
  }

  get isRing(): boolean {
    return this.options.findLateS === 0;
  }

  get edgeCount(): number {
    return this.intake.edgeCount;
  }

  get lastEdgeAt(): number {
    return this.intake.lastEdgeAt;
  }

  get typicalSamples(): number {
    return this.intake.typicalSamples;
  }

  /** Sample up to which nothing is left to be found; NaN: all of them. */
  get decidedUpTo(): number {
    return this.finder.decidedUpTo;
  }

  /** Takes `v[from..to]`, ends included; `v[j]` is sample `base + j` of the stream, `v[from - 1]` the one before. */
  abstract run(v: Float64Array, from: number, to: number, base: number): void;

  /** The detector holds edges, just one where the band is fitted; sample `at` was scanned last and was `x`. */
  protected abstract takeEdges(at: number, x: number): void;

  abstract quietSamples(): number;

  abstract adopt(at: number, remembered: Remembered | null): void;

  /** Samples were lost: `at` is the next one. */
  gap(at: number): void {
    forgetState(this.detector);
    this.intake.gap();
    this.finder.gap(at);
  }

  /** At fixed places of the stream: what was learnt since the last one takes effect. */
  tick(nextAt: number, noiseV: number, mostNoiseV: number, quantumV: number): void {
    this.noiseV = noiseV;
    this.mostNoiseV = mostNoiseV;
    this.quantumV = quantumV;
    this.finder.forgetQuiet(nextAt);
  }

  scan(v: Float64Array, from: number, to: number, base: number, past: Past | null): number {
    const { detector } = this;
    this.past = past;
    const next = runDetector(detector, v, from, to, base, this);
    if (detector.edges.count > 0) this.takeEdges(base + next - 1, v[next - 1]!);
    return next;
  }

  rejected(at: number): void {
    // Edges before it come first: their delay is the one to take off here. Only a fixed band goes on after an edge.
    if (this.detector.edges.count > 0) this.takeEdges(NaN, NaN);
    this.rejectedCount++;
    if (at - this.intake.lastEdgeAt < this.intake.periodSamples / 4) this.keptBackCount++;
    pushRejected(this.rejectedMarks, at / this.options.rateHz - this.intake.delayS);
  }

  wobble(backV: number): void {
    if (backV > this.levels.wobbleV) this.levels.wobbleV = backV;
  }

  /** A tooth that was due did not come: what was there instead is the worst tooth of the turn. */
  toothMissed(): void {
    const { midV, operateV } = this.detector;
    noteMargin(this.intake.marginMeter, (this.emptyV < midV ? this.emptyV : midV) - operateV);
  }

  /** Beside a fixed band the signal swings between these, V. */
  notCounted(lowV: number, highV: number): void {
    const { operateV, releaseV } = this.detector;
    noteMargin(this.intake.marginMeter, Math.min(highV - operateV, releaseV - lowV));
  }

  mayFindLate(at: number): boolean {
    const { findLateS, rateHz } = this.options;
    return findLateS > 0 && at - this.intake.lastEdgeAt <= findLateS * rateHz;
  }

  /** Edge `k` that the detector holds came later after the last one of its polarity than is usual. */
  protected isLate(k: number): boolean {
    const { intake, detector } = this;
    const { midAt, flags } = detector.edges;
    const rising = (flags[k]! & edgeRising) !== 0;
    const same = k > 1 ? midAt[k - 2]! : rising ? intake.riseMidAt : intake.fallMidAt;
    return midAt[k]! - same > longShare * intake.typicalSamples;
  }

  /** Looks through the stretch before edge `k`. @returns true where the band missed teeth; they are in `weak`. */
  protected look(k: number): boolean {
    const { intake, detector, weak, levels, past } = this;
    const { at, midAt, flags } = detector.edges;
    const rising = (flags[k]! & edgeRising) !== 0;
    const same = rising ? intake.riseMidAt : intake.fallMidAt;
    const other = rising ? intake.fallMidAt : intake.riseMidAt;
    weak.count = 0;
    weak.beforeAt = k > 0 ? at[k - 1]! : intake.lastEdgeAt;
    weak.at = at[k]!;
    if (!past || !(weak.at - weak.beforeAt <= past.reach) || !(weak.beforeAt >= past.from - 1)) return false;
    weak.midAt = midAt[k]!;
    weak.otherMidAt = k > 0 ? midAt[k - 1]! : other;
    weak.sameMidAt = k > 1 ? midAt[k - 2]! : same;
    weak.typicalSamples = intake.typicalSamples;
    weak.swingV = levels.highV - levels.lowV;
    weak.noiseV = this.noiseV;
    weak.quantumV = this.quantumV;
    weak.toothCount = intake.log.count;
    weak.look(past.v, past.base, rising);
    if (rising && !Number.isNaN(weak.emptyV)) this.emptyV = weak.emptyV;
    return weak.count > 0;
  }

  /** The teeth found before edge `k` are not counted: their margin is below nothing. */
  protected noteUncounted(k: number): void {
    const { weak, intake, detector } = this;
    const up = (detector.edges.flags[k]! & edgeRising) !== 0;
    const { operateV, releaseV } = detector;
    noteMargin(intake.marginMeter, up ? weak.weakestV - operateV : releaseV - weak.weakestV);
  }

  protected moveBand(operateV: number, releaseV: number, t: number): void {
    setThresholds(this.detector, operateV, releaseV);
    this.options.bands.push({ channel: this.options.channelName, t, operateV, releaseV });
  }
}
