/**
 * From what the detector recorded to edges in time: the filter's delay taken off, a standard error, and what each edge
 * teaches of levels, duty and margin.
 */
import { createEdgeColumns, createEdgeQueue, delayGuessed, roomForEdge, roomInQueue } from '@/signal/columns';
import type { EdgeQueue } from '@/signal/columns';
import { createDelayCurve, delayAt } from '@/signal/delay-curve';
import type { DelayCurve } from '@/signal/delay-curve';
import type { Detector } from '@/signal/detector-state';
import type { Section } from '@/signal/filter-design';
import { followed } from '@/signal/levels';
import type { Levels } from '@/signal/levels';
import { createMarginMeter, endTooth } from '@/signal/margin-meter';
import type { MarginMeter } from '@/signal/margin-meter';
import { edgeRising } from '@/signal/pipeline-types';
import type { EdgeColumns } from '@/signal/pipeline-types';
import { dcDelayS } from '@/signal/response';
import { samplesPerTick } from '@/signal/ticks';
import { breakLog, createToothLog } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

export class EdgeIntake {
  readonly edges: EdgeColumns = createEdgeColumns();
  readonly queue: EdgeQueue = createEdgeQueue();
  readonly marginMeter: MarginMeter;
  readonly log: ToothLog;
  edgeCount = 0;
  duty = NaN;
  delayS = NaN;
  periodSamples = NaN;
  /** Last accepted edge, samples, delay not taken off. */
  lastEdgeAt = NaN;
  private readonly detector: Detector;
  private readonly levels: Levels;
  private readonly rateHz: number;
  private readonly missing: number;
  private readonly oneTooth: boolean;
  private readonly delays: DelayCurve;
  private delayKnown = false;
  private lastExtremeV = NaN;
  private riseMidAt = NaN;
  private fallMidAt = NaN;
  /** Time from mid to the switching point, averaged, samples. */
  private riseSpent = NaN;
  private fallSpent = NaN;

  constructor(
    detector: Detector,
    levels: Levels,
    sections: readonly Section[],
    rateHz: number,
    missing: number,
    teethPerTurn: number,
  ) {
    this.detector = detector;
    this.levels = levels;
    this.rateHz = rateHz;
    this.missing = missing;
    this.oneTooth = teethPerTurn === 1;
    this.delays = createDelayCurve(sections, rateHz);
    this.delayS = dcDelayS(sections, rateHz);
    this.marginMeter = createMarginMeter(teethPerTurn);
    this.log = createToothLog(teethPerTurn, samplesPerTick(rateHz) / 2);
  }

  /** How long after its mid crossing an edge is known: the filter's delay and the way to the switching point, s. */
  get latencyS(): number {
    const spent = Math.max(this.riseSpent || 0, this.fallSpent || 0);
    return Math.max(0, this.delayS || 0) + (spent + 1) / this.rateHz;
  }

  /** Samples were lost: no interval reaches across. */
  gap(): void {
    this.riseMidAt = this.fallMidAt = this.lastExtremeV = NaN;
    breakLog(this.log);
  }

  /**
   * Takes over all edges that the detector holds, at least one. One function over locals on purpose: a number that is
   * passed to a function which is not inlined is boxed.
   * @param noiseV rms of the filtered signal's noise, V; NaN: not known.
   */
  take(noiseV: number): void {
    const { detector, levels, edges, queue, rateHz, missing, oneTooth, delays, marginMeter, log } = this;
    const raw = detector.edges;
    const { operateV, releaseV } = detector;
    const noisePerBand = noiseV / (operateV - detector.midV);
    const periodS = 1 / rateHz;
    let { lowV, highV, wobbleV } = levels;
    let { duty, lastExtremeV, riseMidAt, fallMidAt, riseSpent, fallSpent, periodSamples, delayS } = this;
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
      else if (oneTooth && toothV > wobbleV) wobbleV = toothV;
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
        const gap = missing > 0 && spansGap(period / periodSamples, missing + 1);
        periodSamples = gap ? period / (missing + 1) : period;
        delayS = delayAt(delays, rateHz / periodSamples);
        this.delayKnown = true;
      }

      // Noise over the flank's slope, which is half the band over the time from mid to the switching point (a step between
      // two samples would hold more noise than slope on a gentle flank); no better than the sample grid on a steep one.
      let spent = rising ? riseSpent : fallSpent;
      if (at > midAt) spent = Number.isNaN(spent) ? at - midAt : spent + (at - midAt - spent) / 8;
      if (rising) riseSpent = spent;
      else fallSpent = spent;
      const noise = noisePerBand * spent;
      const grid = raw.midStepV[k]! > swingV / 2 ? 1 / 12 : 0;

      const i = roomForEdge(edges);
      const midS = midAt / rateHz;
      edges.t[i] = at / rateHz - delayS;
      edges.midT[i] = midS - delayS;
      edges.flags[i] = flags;
      const q = roomInQueue(queue);
      queue.at[q] = at;
      queue.midS[q] = midS;
      queue.delayS[q] = delayS;
      queue.sigmaS[q] = Math.sqrt(noise * noise + grid) * periodS;
      queue.extremeV[q] = extremeV;
      queue.flags[q] = flags | (this.delayKnown ? 0 : delayGuessed);
      if (rising) {
        const tooth = log.count++ & log.mask;
        log.riseS[tooth] = midS - delayS;
        log.fallS[tooth] = log.peakV[tooth] = NaN;
        log.troughV[tooth] = extremeV;
        log.sigmaS[tooth] = queue.sigmaS[q]!;
        log.riseWayS[tooth] = (at - midAt) * periodS;
      } else if (log.count > log.unbrokenFrom) {
        const tooth = (log.count - 1) & log.mask;
        log.fallS[tooth] = midS - delayS;
        log.peakV[tooth] = extremeV;
        log.fallWayS[tooth] = (at - midAt) * periodS;
      }
    }
    this.edgeCount += raw.count;
    this.lastEdgeAt = raw.at[raw.count - 1]!;
    raw.count = 0;
    levels.lowV = lowV;
    levels.highV = highV;
    levels.wobbleV = wobbleV;
    this.duty = duty;
    this.lastExtremeV = lastExtremeV;
    this.riseMidAt = riseMidAt;
    this.fallMidAt = fallMidAt;
    this.riseSpent = riseSpent;
    this.fallSpent = fallSpent;
    this.periodSamples = periodSamples;
    this.delayS = delayS;
  }
}

/** Across the gap of the wheel the teeth's frequency is what the filter sees before and after it. */
function spansGap(ratio: number, whole: number): boolean {
  return ratio > Math.sqrt(whole) && ratio < whole * Math.sqrt(whole);
}
