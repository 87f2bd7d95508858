import type { ChannelPath } from '@/signal/channel-path';
import { SizedLatch, findingOf, teethPerTurn } from '@/signal/findings/channel-finding';
import { bandwidthHz, edgeScatterS, filterRiseS, flankMeans } from '@/signal/findings/flank-means';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import type { TurnMeans } from '@/signal/findings/turn-means';
import type { Evidence } from '@/signal/finding-words/values';
import type { Finding } from '@/signal/model';

type Sight = { size: number; severity: Finding['severity']; evidence: Evidence } | null;

/**
 * Switching sensors: one flank so many times slower than the other, and such a share of the period; or less uneven, but
 * a larger share of it; or both flanks together an even larger one. A pull-up of 10 kilohm on a long cable is 50 times
 * slower up than down and harms nothing while it takes less than that.
 */
const uneven = { ratio: 10, share: 0.05, ratioOfLong: 3, longShare: 0.12 };
const bothShare = 0.55;
/**
 * Scatter of an edge over one tooth, and the least that noise on the flank of a sine must explain of it: what the shaft
 * does by itself is none of it. A sine of 15 dB has 0.02.
 */
const scatterShare = 0.02;
const explained = 0.6;
/** Peaks stand above the signal by so much of the noise, and troughs below it (by simulation, 50 to 1000 samples a tooth). */
const noiseInSwing = 4.4;
/** With fewer samples a tooth, what is taken for noise is signal too; the noise is a median over so long at most, s. */
const fewestSamples = 14;
const noiseLastsS = 4;
/** Once open, this much less is enough. */
const staying = 0.7;
/** A low pass this many times above the tooth frequency leaves the slope of a sine as it is. */
const passesSlope = 3;

/** Edges so slow that they cost time, or that noise moves them. */
export class SlowEdgeRule implements FindingRule {
  readonly latches: SizedLatch[];
  private readonly context: RuleContext;
  private readonly means: readonly TurnMeans[];
  private readonly filterRiseS: number;
  /** When the teeth last had too few samples. */
  private coarseS = -Infinity;

  constructor(context: RuleContext, means: readonly TurnMeans[]) {
    this.context = context;
    this.means = means;
    this.latches = context.paths.map(() => new SizedLatch(2));
    this.filterRiseS = filterRiseS(context.settings);
  }

  tick(nowS: number): void {
    const { paths } = this.context;
    for (let index = 0; index < paths.length; index++) {
      if (this.means[index]!.look(nowS)) this.judge(paths[index]!, index, nowS);
      this.latches[index]!.rest(nowS, this.means[index]!.looksS);
    }
  }

  private judge(path: ChannelPath, index: number, nowS: number): void {
    const means = this.means[index]!;
    if (this.context.rateHz < fewestSamples * means.toothHz) this.coarseS = nowS;
    if (!means.bandStays) return;
    const latch = this.latches[index]!;
    const least = latch.open ? staying : 1;
    const linear = path.channel.sensor.kind === 'linear';
    if (linear && nowS - this.coarseS < noiseLastsS) return;
    const sight = linear ? this.noiseMoves(path, means, least) : this.lineIsSlow(path, means, least);
    const { fromS } = means;
    if (!sight) return;
    const { size, severity, evidence } = sight;
    const seen = { fromS, atS: fromS, severity, evidence };
    latch.raiseSized(findingOf('slow-edge', path.channel.name, seen), size, nowS);
  }

  private lineIsSlow(path: ChannelPath, { first, end, toothHz, swingV }: TurnMeans, least: number): Sight {
    const flanks = flankMeans(path, first, end, swingV);
    const riseS = this.own(flanks.riseS);
    const fallS = this.own(flanks.fallS);
    const slowS = Math.max(riseS, fallS);
    const share = slowS * toothHz;
    const ratio = slowS / Math.max(Math.min(riseS, fallS), 0.8 / this.context.rateHz);
    const oneSided =
      (ratio > least * uneven.ratio && share > least * uneven.share) ||
      (ratio > least * uneven.ratioOfLong && share > least * uneven.longShare);
    const both = (riseS + fallS) * toothHz;
    if (!oneSided && !(both > least * bothShare)) return null;
    const evidence = {
      slow: oneSided ? (riseS > fallS ? 'rising' : 'falling') : 'both',
      riseS,
      fallS,
      ofPeriodPercent: 100 * (oneSided ? share : both),
      toothHz,
    };
    return { size: both, severity: both > 0.5 ? 'fault' : 'warn', evidence };
  }

  /** What is left of a flank once the filter's part is taken off. */
  private own(flankS: number): number {
    return Math.sqrt(Math.max(0, flankS ** 2 - this.filterRiseS ** 2));
  }

  /**
   * Judged from how edges really scatter: noise that is large beside the band shortens the way to the switching point, so
   * that its slope looks steeper than it is.
   */
  private noiseMoves(path: ChannelPath, { first, end, toothHz, swingV }: TurnMeans, least: number): Sight {
    const { noiseV, log } = path;
    const slopeVPerS = Math.PI * toothHz * (swingV - noiseInSwing * noiseV);
    const byNoise = (noiseV / slopeVPerS) * toothHz;
    if (!(byNoise > least * explained * scatterShare)) return null;
    const scatterS = edgeScatterS(log, first, end, teethPerTurn(this.context, path));
    const share = scatterS * toothHz;
    if (!(share > least * scatterShare)) return null;
    const evidence: Evidence = {
      slow: 'noise',
      scatterS,
      ofToothPercent: 100 * share,
      noiseV,
      slopeVoltsPerSecond: slopeVPerS,
      toothHz,
    };
    const cutoffHz = passesSlope * toothHz;
    const left = Math.sqrt(cutoffHz / bandwidthHz(this.context.settings, this.context.rateHz));
    if (left < 0.8) {
      evidence.helpingCutoffHz = cutoffHz;
      evidence.scatterThenS = left * scatterS;
    }
    return { size: share, severity: share > 0.05 ? 'fault' : 'warn', evidence };
  }
}
