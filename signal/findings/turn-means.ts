/**
 * What one channel's teeth were like on average over the last whole turns, read from its log twice a second. Whole turns,
 * so that run-out and unequal teeth are the same in each of them.
 */
import type { ChannelPath } from '@/signal/channel-path';
import { teethPerTurn } from '@/signal/findings/channel-finding';
import type { RuleContext } from '@/signal/findings/rule';
import { readableFrom } from '@/signal/tooth-log';

/** Not more often than this, s (ticks are a tenth of a second apart at most). */
const everyS = 0.45;
/** Looks further apart than this have a stop between them, s. */
const longestS = 30;
const fewestTeeth = 4;
const bandShare = 0.02;
const homeShare = 0.2;
/** Peak to peak of edges that noise alone makes: sigmas, and share of the supply of a switching sensor. */
const leastSigmas = 10;
const leastOfSupply = 0.1;
const humOfSupply = 0.02;
const fewestSamples = 8;
/** Mean swing over the largest one: teeth of a sound wheel differ by four to one, noise among teeth by more. */
const leastOfLargest = 0.25;
/** A wheel with more teeth than this is judged by so many of them. */
const mostTeeth = 512;
/** From one look to the next the speed may differ by so much, to learn from it and to judge by it. */
const steadyShare = 0.05;
const slowShare = 0.15;

export class TurnMeans {
  /** The teeth looked at: `first` up to, not with, `end`. All of them have ended, and the one after has begun. */
  first = 0;
  end = 0;
  fromS = NaN;
  toS = NaN;
  /** Of one position of the wheel, Hz. */
  toothHz = NaN;
  highV = NaN;
  lowV = NaN;
  /** The highest peak of all. */
  topV = NaN;
  /** The lowest peak and the highest trough; infinite where none is known. */
  leastPeakV = NaN;
  mostTroughV = NaN;
  /** The longest interval, s. */
  longestS = NaN;
  /** High share of the period, of teeth whose neighbour is in its place. */
  duty = NaN;
  /** Standard error of that mean, from how teeth differ. */
  dutyError = NaN;
  /** The speed was the same at the look before. */
  steady = false;
  /** It was not far from it. */
  ramps = true;
  /** The band has found itself: one that still moves cuts teeth at another level each time. */
  bandStays = false;
  private readonly path: ChannelPath;
  private readonly context: RuleContext;
  /** Teeth of one turn; NaN for a channel that carries anything else. */
  readonly turn: number;
  /** Places of one turn, those without a tooth included. */
  readonly positions: number;
  private disturbances = -1;
  private begin = 0;
  private lookedS = -Infinity;
  private askedS = NaN;
  private isNew = false;
  private beforeHz = NaN;
  private beforeMidV = NaN;
  /** How far the middle of a fitted band stands from where the mean tooth would have it, share of the swing. */
  bandOff = 0;
  /** Between the last two looks, s; 0 before the second. */
  looksS = 0;
  private largestV = 0;

  constructor(context: RuleContext, path: ChannelPath) {
    const { pulsesPerTurn } = context.rig.wheel;
    this.context = context;
    this.path = path;
    this.turn = teethPerTurn(context, path);
    this.positions = path.channel.role === 'Z' ? 1 : pulsesPerTurn;
  }

  get swingV(): number {
    return this.highV - this.lowV;
  }

  get middleV(): number {
    return (this.highV + this.lowV) / 2;
  }

  /** To be asked at every tick, by as many rules as want. @returns true where there is something new to judge. */
  look(nowS: number): boolean {
    if (nowS !== this.askedS) {
      this.askedS = nowS;
      this.isNew = this.lookAgain(nowS);
    }
    return this.isNew;
  }

  private lookAgain(nowS: number): boolean {
    if (nowS - this.lookedS < everyS || Number.isNaN(this.turn)) return false;
    const { motion, settleS } = this.context;
    const { calm, state } = motion;
    const { log } = this.path;
    if (calm.disturbances !== this.disturbances || state !== 'running' || nowS - calm.sinceS < settleS) {
      this.disturbances = calm.disturbances;
      this.begin = log.count;
      this.beforeHz = NaN;
      return false;
    }
    const begin = readableFrom(log, this.begin);
    const end = log.count - 1;
    const teeth = this.wanted(end - begin);
    if (teeth === 0) return false;
    const sinceS = nowS - this.lookedS;
    this.looksS = sinceS < longestS ? sinceS : 0;
    this.lookedS = nowS;
    this.first = end - teeth;
    this.end = end;
    this.average();
    const change = Math.abs(this.toothHz / this.beforeHz - 1);
    this.steady = change < steadyShare;
    this.ramps = !(change < slowShare);
    this.beforeHz = this.toothHz;
    this.bandStays = this.isBandAtHome();
    return !this.isNoise();
  }

  private isBandAtHome(): boolean {
    const { operateV, releaseV } = this.path;
    const { band } = this.context.settings;
    const midV = (operateV + releaseV) / 2;
    const movedV = Math.abs(midV - this.beforeMidV);
    this.beforeMidV = midV;
    this.bandOff = 0;
    if (band.mode === 'fixed') return true;
    const homeV = this.lowV + ((band.operateFraction + band.releaseFraction) / 2) * this.swingV;
    this.bandOff = Math.abs(midV - homeV) / this.swingV;
    return movedV < bandShare * this.swingV && this.bandOff < homeShare;
  }

  /** Edges that noise made of a line at rest are no teeth to judge. */
  private isNoise(): boolean {
    const { channel, noiseV } = this.path;
    const { kind, supplyV } = channel.sensor;
    if (this.swingV < Math.max(leastOfLargest * this.largestV, noiseV > 0 ? leastSigmas * noiseV : 0))
      return true;
    // So few samples a tooth that noise is not known: noise may be all it is.
    if (Number.isNaN(noiseV) && this.context.rateHz < fewestSamples * this.toothHz) return true;
    if (supplyV === null) return false;
    if (kind !== 'linear') return this.swingV < leastOfSupply * supplyV;
    // Mains hum may be all there is on a shaft at rest.
    const isHum = [50, 60].some((hz) => Math.abs(this.toothHz - hz) < 0.5);
    return isHum && this.swingV < humOfSupply * supplyV;
  }

  /** Of so many teeth at hand; 0 where they are too few. */
  private wanted(atHand: number): number {
    const { turn } = this;
    if (turn > mostTeeth) return atHand >= mostTeeth ? mostTeeth : 0;
    const least = turn * Math.ceil(fewestTeeth / turn);
    const since = this.path.log.count - 1 - this.end;
    // Two looks that share most of their teeth prove no more than one.
    if (atHand < least || 2 * since < least) return 0;
    // As many as came since the last look, so that quick wheels are averaged over more turns.
    const recent = Math.min(atHand, mostTeeth, since);
    return Math.max(least, turn * Math.floor(recent / turn));
  }

  private average(): void {
    const { log } = this.path;
    const { mask } = log;
    const { first, end, turn } = this;
    this.fromS = log.riseS[first & mask]!;
    this.toS = log.riseS[end & mask]!;
    const positions = turn > mostTeeth ? end - first : ((end - first) / turn) * this.positions;
    const pitchS = (this.toS - this.fromS) / positions;
    this.toothHz = 1 / pitchS;
    let high = 0;
    let low = 0;
    let highS = 0;
    let wholeS = 0;
    let sum = 0;
    let squares = 0;
    let counted = 0;
    let largestV = 0;
    let topV = -Infinity;
    let leastPeakV = Infinity;
    let mostTroughV = -Infinity;
    let longestS = 0;
    let riseS = this.fromS;
    for (let n = first; n < end; n++) {
      const i = n & mask;
      const startS = riseS;
      riseS = log.riseS[(n + 1) & mask]!;
      const periodS = riseS - startS;
      const peakV = log.peakV[i]!;
      const troughV = log.troughV[i]!;
      high += peakV;
      low += troughV;
      largestV = Math.max(largestV, peakV - troughV);
      topV = Math.max(topV, peakV);
      longestS = Math.max(longestS, periodS);
      if (peakV < leastPeakV) leastPeakV = peakV;
      if (troughV > mostTroughV) mostTroughV = troughV;
      if (periodS > 1.5 * pitchS) continue;
      const toothHighS = log.fallS[i]! - startS;
      const share = toothHighS / periodS;
      highS += toothHighS;
      wholeS += periodS;
      sum += share;
      squares += share * share;
      counted++;
    }
    this.largestV = largestV;
    this.topV = topV;
    this.leastPeakV = leastPeakV;
    this.mostTroughV = mostTroughV;
    this.longestS = longestS;
    this.highV = high / (end - first);
    this.lowV = low / (end - first);
    this.duty = highS / wholeS;
    this.dutyError = Math.sqrt(Math.max(0, squares / counted - (sum / counted) ** 2) / counted);
  }
}
