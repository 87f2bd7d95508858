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
import { lagOf, spreadOf } from '@/signal/flank-error';
import { followed, shareOfWeak } from '@/signal/levels';
import type { Levels } from '@/signal/levels';
import { createMarginMeter, endTooth } from '@/signal/margin-meter';
import type { MarginMeter } from '@/signal/margin-meter';
import { edgeLate, edgeRising } from '@/signal/pipeline-types';
import type { EdgeColumns } from '@/signal/pipeline-types';
import { dcDelayS, noiseBehind } from '@/signal/response';
import { samplesPerTick } from '@/signal/ticks';
import { strongShare } from '@/signal/tooth-size';
import { breakLog, createToothLog } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

export type IntakeOptions = {
  sections: readonly Section[];
  rateHz: number;
  missingPulses: number;
  teethPerTurn: number;
  /** Between neighbouring samples of the filtered noise; where not given, as the sections make it of white noise. */
  correlation?: number | undefined;
  /** Delays of these sections, where another channel has them already. */
  delays?: DelayCurve | undefined;
  /** Edges may be found so long after they passed; 0 where other channels' edges count in order with them. */
  findLateS: number;
};

/**
 * The usual interval follows each one by so much at most, unless two of one polarity in a row agree as well: one tooth too
 * many, or too few, does not make it another.
 */
const mostLonger = 1.25;
const mostShorter = 0.8;
/** Noise takes no more than the rest of half the band from what the flank has to climb. */
const leastOfHalf = 0.3;
/**
 * A straight line between two samples of a flank of steepness w (2 slopes over the swing: of a sine its radians a sample)
 * misses the middle by k w^2 f (1 - f) (1 - 2 f), f the place between them: k is 1/6 for a sine (by its series), 1/3 where
 * flanks are as curved as a hyperbolic tangent. That much is taken off, up to a flank of some three samples.
 */
const flankBend = 1.3 / 6;
const steepestSquare = 1.7;
/**
 * What is left, rms, samples times the square of w: of teeth that are about sines (w a tooth near 2 pi), and of shorter
 * pulses, whose middle is not where they are straight. Found with sines, sines with harmonics, and Gaussian pulses.
 */
const leftOfSine = 0.004;
const leftOfPulse = 0.02;
const mostOfSine = 9;

export class EdgeIntake {
  readonly edges: EdgeColumns = createEdgeColumns();
  readonly queue: EdgeQueue;
  readonly marginMeter: MarginMeter;
  readonly log: ToothLog;
  edgeCount = 0;
  duty = NaN;
  delayS = NaN;
  periodSamples = NaN;
  /** The interval between teeth, position by position, that is usual here; samples. */
  typicalSamples = NaN;
  /** The last two intervals, of either polarity, samples. */
  private periodBefore = NaN;
  private periodBetween = NaN;
  /** Last accepted edge, samples, delay not taken off. */
  lastEdgeAt = NaN;
  /** Its peak or trough, V; NaN after a gap. */
  lastExtremeV = NaN;
  /** Last mid crossings, samples. */
  riseMidAt = NaN;
  fallMidAt = NaN;
  private readonly detector: Detector;
  private readonly levels: Levels;
  private readonly rateHz: number;
  private readonly missing: number;
  private readonly oneTooth: boolean;
  private readonly weakGain: number;
  private readonly delays: DelayCurve;
  private delayKnown = false;
  /** What a flank takes for one volt at mid, averaged, samples. */
  private risePerV = NaN;
  private fallPerV = NaN;
  /** Of the noise, over its rms: a step from sample to sample; and what the line between two samples makes of it. */
  private readonly noiseStep: number;
  private readonly oneCrossing: number;

  constructor(detector: Detector, levels: Levels, options: IntakeOptions) {
    const { sections, rateHz, missingPulses, teethPerTurn, findLateS } = options;
    this.detector = detector;
    this.levels = levels;
    this.rateHz = rateHz;
    this.queue = createEdgeQueue(rateHz);
    this.missing = missingPulses;
    this.oneTooth = teethPerTurn === 1;
    this.weakGain = findLateS > 0 ? shareOfWeak : 0;
    const correlation = options.correlation ?? noiseBehind(sections).correlation;
    this.noiseStep = Math.sqrt(2 * (1 - correlation));
    this.oneCrossing = Math.sqrt((2 + correlation) / 3);
    this.delays = options.delays ?? createDelayCurve(sections, rateHz);
    this.delayS = dcDelayS(sections, rateHz);
    this.marginMeter = createMarginMeter(teethPerTurn);
    this.log = createToothLog(teethPerTurn, samplesPerTick(rateHz) / 2);
  }

  /** How long after its mid crossing an edge is known: the filter's delay and the way to the switching point, s. */
  get latencyS(): number {
    const { operateV, midV } = this.detector;
    const way = (operateV - midV) * Math.max(this.risePerV || 0, this.fallPerV || 0) || 0;
    return Math.max(0, this.delayS || 0) + (way + 1) / this.rateHz;
  }

  /** Samples were lost: no interval reaches across. */
  gap(): void {
    this.riseMidAt = this.fallMidAt = this.lastExtremeV = NaN;
    breakLog(this.log);
  }

  /**
   * Takes over edges that the detector holds, `first` to before `last`, at least one; with the last of them it is emptied.
   * One function over locals on purpose: a number that is passed to a function which is not inlined is boxed.
   * @param noiseV rms of the filtered signal's noise, V; NaN: not known.
   */
  take(noiseV: number, first: number, last: number): void {
    const { detector, levels, edges, queue, rateHz, missing, oneTooth, delays, marginMeter, log } = this;
    const raw = detector.edges;
    const { operateV, releaseV } = detector;
    const halfV = operateV - detector.midV;
    const noiseStepV = this.noiseStep * noiseV;
    const { oneCrossing, weakGain } = this;
    const periodS = 1 / rateHz;
    let { lowV, highV, wobbleV } = levels;
    let { duty, lastExtremeV, riseMidAt, fallMidAt, risePerV, fallPerV, periodSamples, delayS } = this;
    let { typicalSamples, periodBefore, periodBetween } = this;
    // The one tooth of such a wheel has no other to be weak beside.
    const strongAt = oneTooth ? 0.51 : strongShare;
    for (let k = first; k < last; k++) {
      const at = raw.at[k]!;
      const line = raw.midAt[k]!;
      const extremeV = raw.extremeV[k]!;
      const flags = raw.flags[k]!;
      const rising = (flags & edgeRising) !== 0;
      // Where the state before was not seen from its begin, its peak or trough may not have been either.
      const isWhole = lastExtremeV === lastExtremeV;
      const beyondV = rising ? releaseV - extremeV : extremeV - operateV;
      if (isWhole && beyondV < marginMeter.thisTurnV) marginMeter.thisTurnV = beyondV;
      if (!rising) endTooth(marginMeter);

      const toothV = Math.abs(extremeV - lastExtremeV);
      const swingV = highV - lowV;
      let perV = rising ? risePerV : fallPerV;
      const steepBefore = 2 / (perV * swingV);
      const square = steepBefore * steepBefore;
      const share = line - Math.floor(line);
      const bend = square < steepestSquare ? flankBend * square * share * (1 - share) * (1 - 2 * share) : 0;
      const midAt = line - bend < at ? line - bend : at;
      lastExtremeV = extremeV;
      if (!(toothV < swingV / 2)) wobbleV *= 0.97;
      else if (oneTooth && toothV > wobbleV) wobbleV = toothV;
      if (rising) lowV = followed(lowV, extremeV, swingV, toothV, strongAt, weakGain);
      else highV = followed(highV, extremeV, swingV, toothV, strongAt, weakGain);

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
        const isAgain =
          periodSamples >= mostShorter * periodBefore && periodSamples <= mostLonger * periodBefore;
        if (!isAgain && periodSamples > mostLonger * typicalSamples) typicalSamples *= mostLonger;
        else if (!isAgain && periodSamples < mostShorter * typicalSamples) typicalSamples *= mostShorter;
        else typicalSamples = periodSamples;
        periodBefore = periodBetween;
        periodBetween = periodSamples;
        delayS = delayAt(delays, 1 / periodSamples);
        this.delayKnown = true;
      }

      // The slope is half the band over the time from mid to the switching point (a step between two samples would hold more
      // noise than slope on a gentle flank); the former comes late, and the latter early, where they are crossed repeatedly.
      if (at > midAt && !(flags & edgeLate)) {
        const farV = halfV - 2 * noiseV * lagOf(noiseStepV * perV);
        const latest =
          (at - midAt) / (farV > leastOfHalf * halfV ? farV : noiseV >= 0 ? leastOfHalf * halfV : halfV);
        perV = Number.isNaN(perV) ? latest : perV + (latest - perV) / 8;
      }
      if (rising) risePerV = perV;
      else fallPerV = perV;
      const noise = noiseV * perV * spreadOf(noiseStepV * perV, oneCrossing);
      // On a flank of one sample the line says next to nothing.
      const steep = steepBefore === steepBefore ? steepBefore : 2 / (perV * swingV);
      const off = (steep * periodSamples < mostOfSine ? leftOfSine : leftOfPulse) * steep * steep;
      const grid = raw.midStepV[k]! > swingV / 2 ? 1 / 12 : off * off;

      const i = roomForEdge(edges);
      const midS = midAt * periodS;
      edges.t[i] = at * periodS - delayS;
      edges.midT[i] = midS - delayS;
      edges.flags[i] = flags;
      const q = roomInQueue(queue);
      queue.at[q] = at;
      queue.midS[q] = midS;
      queue.delayS[q] = delayS;
      queue.sigmaS[q] = Math.sqrt(noise * noise + grid) * periodS;
      queue.gridS[q] = off * periodS;
      queue.extremeV[q] = extremeV;
      queue.flags[q] = flags | (this.delayKnown ? 0 : delayGuessed);
      if (rising) {
        const tooth = log.count++ & log.mask;
        log.riseS[tooth] = midS - delayS;
        log.fallS[tooth] = log.peakV[tooth] = NaN;
        log.troughV[tooth] = isWhole ? extremeV : NaN;
        log.sigmaS[tooth] = queue.sigmaS[q]!;
        log.riseWayS[tooth] = (at - midAt) * periodS;
      } else if (log.count > log.unbrokenFrom) {
        const tooth = (log.count - 1) & log.mask;
        log.fallS[tooth] = midS - delayS;
        log.peakV[tooth] = extremeV;
        log.fallWayS[tooth] = (at - midAt) * periodS;
      }
    }
    this.edgeCount += last - first;
    this.lastEdgeAt = raw.at[last - 1]!;
    if (last === raw.count) raw.count = 0;
    levels.lowV = lowV;
    levels.highV = highV;
    levels.wobbleV = wobbleV;
    this.duty = duty;
    this.lastExtremeV = lastExtremeV;
    this.riseMidAt = riseMidAt;
    this.fallMidAt = fallMidAt;
    this.risePerV = risePerV;
    this.fallPerV = fallPerV;
    this.periodSamples = periodSamples;
    this.typicalSamples = typicalSamples;
    this.periodBefore = periodBefore;
    this.periodBetween = periodBetween;
    this.delayS = delayS;
  }
}

/** Across the gap of the wheel the teeth's frequency is what the filter sees before and after it. */
function spansGap(ratio: number, whole: number): boolean {
  return ratio > Math.sqrt(whole) && ratio < whole * Math.sqrt(whole);
}
