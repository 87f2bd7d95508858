/**
 * Whether a channel's teeth are those of a shaft that turns. One that turns makes intervals which change little, or all
 * the same way while it speeds up or slows down; one that stands and shakes makes them longer and shorter by turns.
 */
import type { ChannelPath } from '@/signal/channel-path';
import type { RuleContext } from '@/signal/findings/rule';
import { readableFrom } from '@/signal/tooth-log';
import type { ToothLog } from '@/signal/tooth-log';

/** Intervals that are looked at. */
export const unrestIntervals = 7;
/**
 * An interval so much longer or shorter than the one before (logarithm) is a change: three times what an unevenness of 1 %
 * of the pitch makes, and more where the sample grid is coarse.
 */
const change = 0.07;
const changeOfSamples = 1.2;
const fewestSamples = 8;
const fewestChanges = 3;
const fewestTurns = 2;

export type Unrest = {
  /** Longer and shorter by turns. */
  isIrregular: boolean;
  fromS: number;
  lastS: number;
  meanS: number;
  longestS: number;
  /** Largest ratio of neighbouring intervals. */
  mostRatio: number;
  /** Most and least peak to peak of these teeth, V. */
  mostV: number;
  leastV: number;
};

const intervals = new Float64Array(unrestIntervals);

/**
 * Of the last teeth, those after `sinceS` only; null where there are too few.
 * @param stepS of the sample grid. @param missing positions in a row that the wheel lacks.
 */
export function unrestOf(log: ToothLog, sinceS: number, stepS: number, missing: number): Unrest | null {
  const last = log.count - 1;
  const first = last - unrestIntervals;
  if (first < readableFrom(log, 0)) return null;
  const fromS = log.riseS[first & log.mask]!;
  if (!(fromS > sinceS)) return null;
  const lastS = log.riseS[last & log.mask]!;
  let mostV = 0;
  let leastV = Infinity;
  let longestS = 0;
  let beforeS = fromS;
  for (let k = 0; k < unrestIntervals; k++) {
    const swingV = log.peakV[(first + k) & log.mask]! - log.troughV[(first + k) & log.mask]!;
    if (swingV > mostV) mostV = swingV;
    if (swingV < leastV) leastV = swingV;
    const riseS = log.riseS[(first + k + 1) & log.mask]!;
    intervals[k] = riseS - beforeS;
    if (intervals[k]! > longestS) longestS = intervals[k]!;
    beforeS = riseS;
  }
  if (missing > 0) shortenGap(missing + 1);
  const meanS = (lastS - fromS) / unrestIntervals;
  const unrest = { isIrregular: false, fromS, lastS, meanS, longestS, mostRatio: 1, mostV, leastV };
  judgeChanges(unrest, stepS);
  if (missing > 0 && unrest.isIrregular) judgeWithGap(unrest, stepS, missing + 1);
  return unrest;
}

/** While the speed changes the gap is hardly longer than its neighbours: whichever interval it may be, what is left is judged. */
function judgeWithGap(unrest: Unrest, stepS: number, whole: number): void {
  for (let k = 0; k < unrestIntervals && unrest.isIrregular; k++) {
    const gapS = intervals[k]!;
    intervals[k] = gapS / whole;
    judgeChanges(unrest, stepS);
    intervals[k] = gapS;
  }
  if (unrest.isIrregular) judgeChanges(unrest, stepS);
}

function judgeChanges(unrest: Unrest, stepS: number): void {
  const least = change + (changeOfSamples * stepS) / unrest.meanS;
  let changes = 0;
  let turns = 0;
  let way = 0;
  unrest.mostRatio = 1;
  for (let k = 1; k < unrestIntervals; k++) {
    const ratio = intervals[k]! / intervals[k - 1]!;
    unrest.mostRatio = Math.max(unrest.mostRatio, ratio, 1 / ratio);
    if (!(Math.abs(Math.log(ratio)) > least)) continue;
    changes++;
    const sign = ratio > 1 ? 1 : -1;
    if (way !== 0 && sign !== way) turns++;
    way = sign;
  }
  // With fewer samples teeth go by between them.
  unrest.isIrregular =
    unrest.meanS > fewestSamples * stepS && changes >= fewestChanges && turns >= fewestTurns;
}

/**
 * The wheel's own gap, longer than either neighbour by `whole` times or so, as one position. At an end of the row it makes
 * one change, which does no harm.
 */
function shortenGap(whole: number): void {
  const least = Math.sqrt(whole);
  for (let k = 1; k + 1 < unrestIntervals; k++) {
    const before = intervals[k - 1]!;
    const after = intervals[k + 1]!;
    // One still longer is a halt.
    if (!(intervals[k]! > least * Math.max(before, after))) continue;
    if (intervals[k]! > 1.5 * whole * Math.max(before, after)) continue;
    intervals[k] = intervals[k]! / whole;
    return;
  }
}

/** The fastest run seen lately counts for less by so much a second. */
const fadingPerS = 0.005;
const steadyRatio = 1.1;
const everyS = 0.4;
/** So many times the shortest tooth is nearly at rest. */
const atRest = 3;
/** Teeth so many times larger than those that were learnt from. */
export const grown = 2.5;

/** What a channel was like when the shaft last turned steadily for a turn and for a dozen teeth. */
export class RunReference {
  /** Shortest tooth of late, s. */
  toothS = NaN;
  /** Peak to peak, V. */
  swingV = NaN;
  /** Since then it came nearly to rest: a tooth took several times as long. */
  hasSlowed = false;
  /** What comes now is not to be learnt from. */
  isHeld = false;
  private readonly context: RuleContext;
  private readonly path: ChannelPath;
  private lastS = NaN;
  private dueS = -Infinity;

  constructor(context: RuleContext, path: ChannelPath) {
    this.context = context;
    this.path = path;
  }

  tick(nowS: number): void {
    if (this.isHeld || nowS < this.dueS) return;
    this.dueS = nowS + everyS;
    const { motion, rig, rateHz } = this.context;
    const { log } = this.path;
    const needed = Math.max(12, rig.wheel.pulsesPerTurn);
    const unrest = unrestOf(log, -Infinity, 1 / rateHz, rig.wheel.missingPulses);
    if (!unrest) return;
    const { meanS, longestS, mostRatio, mostV, leastV } = unrest;
    const nearlyRestS = atRest * (rig.wheel.missingPulses + 1) * this.toothS;
    if (motion.state === 'stopped' || longestS > nearlyRestS) this.hasSlowed = true;
    if (motion.state !== 'running' || motion.calm.teeth < needed || unrest.isIrregular) return;
    // Edges of hum or noise were learnt from on a line at rest: no wheel's teeth grow like that.
    if (mostV > grown * this.swingV) this.toothS = this.swingV = NaN;
    if (mostRatio > steadyRatio + 2 / (meanS * rateHz)) return;
    // Weak teeth alone are no turning wheel's, unless they stay for turns on end.
    if (mostV < 0.6 * this.swingV && motion.calm.teeth < 3 * needed) return;
    const faded = this.toothS * (1 + fadingPerS * (nowS - this.lastS));
    this.toothS = Number.isNaN(this.toothS) ? meanS : Math.min(meanS, faded);
    this.swingV = leastV;
    this.hasSlowed = false;
    this.lastS = nowS;
  }
}
