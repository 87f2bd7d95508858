import type { ChannelPath } from '@/signal/channel-path';
import { designFilters } from '@/signal/filter-design';
import type { Section } from '@/signal/filter-design';
import { Baseline } from '@/signal/findings/baseline';
import { isDrowned } from '@/signal/findings/causes';
import { SizedLatch, findingOf, takesMiddleAway } from '@/signal/findings/channel-finding';
import { NoisyEdges } from '@/signal/findings/noisy-edges';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import type { SlowSpectra } from '@/signal/findings/slow-spectrum';
import { ShortSwing } from '@/signal/findings/swing-short';
import { againstBand, againstNoise, againstSupply } from '@/signal/findings/swing-sights';
import type { SwingSight } from '@/signal/findings/swing-sights';
import { unseenSwing } from '@/signal/findings/swing-unseen';
import type { UnseenTeeth } from '@/signal/findings/unseen-teeth';
import type { TurnMeans } from '@/signal/findings/turn-means';
import { responseAt } from '@/signal/response';

/** Of the usual swing at this speed; at one far from those known, of a sensor that does not live by speed, a little less. */
const fallenShare = 0.5;
const fallenElsewhere = 0.4;
/** Speeds within this factor are as good as the same. */
const near = 1.5;
const recoveredShare = 0.6;
const strangeShare = 0.1;
const farLarger = 3;
/** So near to an end, share of the converter's range. */
const cutOffShare = 0.01;
const looksForBaseline = 2;
const looksToOpen = 2;
/** With fewer samples a tooth, what is taken for noise is signal too. */
const fewestSamples = 14;
/** A filter that leaves less than this of the teeth is named. */
const filterBlame = 0.7;

/**
 * A swing that is too small for the band, for the noise, for its sensor, or beside what it was in this stream: for each
 * direction and half octave of speed, since the swing of a coil grows with speed.
 */
export class WeakSwingRule implements FindingRule {
  readonly latches: SizedLatch[];
  private readonly context: RuleContext;
  private readonly means: readonly TurnMeans[];
  private readonly swings: Baseline[];
  private readonly short: ShortSwing[];
  private readonly seen: number[];
  private readonly rejected: number[];
  private readonly sections: readonly Section[];
  private readonly levelsKnown: boolean;
  private readonly isFixed: boolean;
  private readonly unseen: UnseenTeeth;
  private readonly noisyEdges: NoisyEdges[];

  constructor(context: RuleContext, means: readonly TurnMeans[], spectra: SlowSpectra, unseen: UnseenTeeth) {
    const { paths, settings, rateHz } = context;
    this.context = context;
    this.means = means;
    this.unseen = unseen;
    this.noisyEdges = paths.map((_, index) => new NoisyEdges(context, index));
    this.latches = paths.map(() => new SizedLatch(2));
    this.swings = paths.map(() => new Baseline(looksForBaseline, true));
    this.short = paths.map((_, index) => new ShortSwing(context, index, spectra));
    this.seen = paths.map(() => 0);
    this.rejected = paths.map(() => 0);
    this.sections = designFilters(settings.filter, rateHz);
    this.levelsKnown = !takesMiddleAway(settings);
    this.isFixed = settings.band.mode === 'fixed';
  }

  tick(nowS: number): void {
    const { paths, lanes, motion, rateHz } = this.context;
    for (let index = 0; index < paths.length; index++) {
      const latch = this.latches[index]!;
      if (this.means[index]!.look(nowS)) this.judge(paths[index]!, index, nowS);
      const sight = this.short[index]!.look(nowS);
      if (sight !== undefined) this.count(index, sight, nowS, sight?.sure === false);
      if (this.short[index]!.isBeside && lanes.includes(index)) motion.doubt(Math.round(nowS * rateHz), nowS);
      const noisy = this.isFixed ? null : this.noisyEdges[index]!.look(nowS);
      if (noisy) this.raise(index, noisy, nowS, false);
      const unseen = unseenSwing(this.context, this.unseen, index);
      if (unseen) this.raise(index, unseen, nowS, !unseen.sure);
      latch.rest(nowS, this.means[index]!.looksS);
    }
  }

  private judge(path: ChannelPath, index: number, nowS: number): void {
    const means = this.means[index]!;
    const open = this.latches[index]!.open !== null;
    const rejected = path.rejectedCount - this.rejected[index]!;
    this.rejected[index] = path.rejectedCount;
    const sights = [
      this.isFixed ? againstBand(path, means, rejected, open) : this.noisy(path, means, open),
      this.fallen(path, index),
      this.levelsKnown ? againstSupply(path, means, open) : null,
    ];
    const sight = sights.reduce((worst, one) => (one && one.size > (worst?.size ?? 0) ? one : worst), null);
    if (sight) this.blameFilter(sight, means.toothHz);
    this.count(index, sight, nowS, false);
  }

  private noisy(path: ChannelPath, means: TurnMeans, open: boolean): SwingSight | null {
    // The steps of a switching sensor pass for noise where they are close.
    if (path.channel.sensor.kind !== 'linear' || this.context.rateHz < fewestSamples * means.toothHz)
      return null;
    return againstNoise(path, means, open);
  }

  /** Opens at the second look in a row. */
  private count(index: number, sight: SwingSight | null, nowS: number, unsure: boolean): void {
    this.seen[index] = sight ? this.seen[index]! + 1 : 0;
    if (sight && (this.latches[index]!.open || this.seen[index]! >= looksToOpen))
      this.raise(index, sight, nowS, unsure);
  }

  private raise(
    index: number,
    { size, severity, atS, evidence }: SwingSight,
    nowS: number,
    unsure: boolean,
  ): void {
    const fromS = Math.min(atS, nowS);
    const outcome = unsure ? 'cannot-tell' : 'found';
    const { name } = this.context.paths[index]!.channel;
    const finding = findingOf('weak-swing', name, { fromS, atS, severity, outcome, evidence });
    const latch = this.latches[index]!;
    // What it was folded under then follows from it now.
    if (isDrowned(finding) && latch.open && !isDrowned(latch.open)) latch.open.causedBy = null;
    latch.raiseSized(finding, size, nowS);
  }

  private fallen(path: ChannelPath, index: number): SwingSight | null {
    const { toothHz, swingV, fromS, steady } = this.means[index]!;
    const { direction } = this.context.motion;
    const baseline = this.swings[index]!;
    const reference = this.reference(path, index);
    const share = swingV / reference.swingV;
    // A swing that is cut off, beside one that was not, is no usual one.
    const strong = share > 1 && isCutOff(path, this.means[index]!);
    // Noise at rest, not teeth, was learnt before.
    if (share > farLarger && !strong) baseline.forget();
    // A speed that is new while the swing is on its way down must not take that for usual.
    const strange = !reference.own && Math.abs(share - 1) > strangeShare;
    if (steady && !strange && !strong && !(share < recoveredShare))
      baseline.learn(direction, toothHz, swingV);
    if (!(share < (this.latches[index]!.open ? recoveredShare : reference.limit))) return null;
    const usualV = reference.swingV;
    const evidence = { against: 'before', swingV, usualSwingV: usualV, leftPercent: 100 * share, toothHz };
    return { size: 0.5 / share, severity: share < 0.25 ? 'fault' : 'warn', atS: fromS, evidence };
  }

  /**
   * The usual swing at this speed, or from the nearest speed known, less what the filter takes here; not for a sensor
   * without supply, which is a coil and lives by speed.
   */
  private reference(path: ChannelPath, index: number): { swingV: number; own: boolean; limit: number } {
    const { direction } = this.context.motion;
    const { toothHz } = this.means[index]!;
    const baseline = this.swings[index]!;
    const own = baseline.usual(direction, toothHz);
    const { supplyV } = path.channel.sensor;
    if (!Number.isNaN(own) || !(supplyV !== null && supplyV > 0))
      return { swingV: own, own: true, limit: fallenShare };
    const nearHz = baseline.nearestHz(direction, toothHz);
    const swingV = (baseline.usual(direction, nearHz) * this.gainAt(toothHz)) / this.gainAt(nearHz);
    const isNear = nearHz < near * toothHz && toothHz < near * nearHz;
    return { swingV, own: false, limit: isNear ? fallenShare : fallenElsewhere };
  }

  private gainAt(hz: number): number {
    const { sections, context } = this;
    if (sections.length === 0) return 1;
    return responseAt(sections, Math.min(hz, context.rateHz / 2), context.rateHz).magnitude;
  }

  private blameFilter(sight: SwingSight, toothHz: number): void {
    const gain = this.gainAt(toothHz);
    if (gain < filterBlame) sight.evidence.filterPercent = 100 * gain;
  }
}

/** The teeth come to an end of what the converter can tell. */
function isCutOff({ rails }: ChannelPath, { highV, lowV }: TurnMeans): boolean {
  if (!rails) return false;
  const within = cutOffShare * (rails.highV - rails.lowV);
  return highV > rails.highV - within || lowV < rails.lowV + within;
}
