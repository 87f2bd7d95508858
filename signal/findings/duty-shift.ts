import type { ChannelPath } from '@/signal/channel-path';
import { Baseline } from '@/signal/findings/baseline';
import { SizedLatch, findingOf } from '@/signal/findings/channel-finding';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import type { TurnMeans } from '@/signal/findings/turn-means';
import type { Evidence } from '@/signal/finding-words/values';

const opensAt = 0.05;
const staysAt = 0.03;
/** Beside the half octave of speed next to it, where its own is not known yet. */
const opensBesideAt = 0.08;
/** So many standard errors of the mean: teeth that differ much from each other prove less. */
const errors = 4;
/** The swing may differ from the usual one by so much: pulses of one pole widen as they grow. */
const swingShare = 0.15;
/** A latch before poles of equal length is high for half of the time; so far from it, poles or points are not equal. */
const latchOpensAt = 0.2;
const latchStaysAt = 0.17;
const farLarger = 3;
const looksForBaseline = 2;
/** Share of the swing. */
const mostOff = 0.08;
const looksToOpen = 2;

/**
 * The share of high in the period has moved from what it was at this speed and in this direction, while the swing has
 * not. A filter and a slow line change it with speed, so that each half octave of speed has a baseline of its own.
 */
export class DutyShiftRule implements FindingRule {
  readonly latches: SizedLatch[];
  private readonly context: RuleContext;
  private readonly means: readonly TurnMeans[];
  private readonly duties: Baseline[];
  private readonly swings: Baseline[];
  private readonly seen: number[];

  constructor(context: RuleContext, means: readonly TurnMeans[]) {
    const { paths } = context;
    this.context = context;
    this.means = means;
    this.latches = paths.map(() => new SizedLatch(2));
    this.duties = paths.map(() => new Baseline(looksForBaseline, true));
    this.swings = paths.map(() => new Baseline(looksForBaseline, true));
    this.seen = paths.map(() => 0);
  }

  tick(nowS: number): void {
    const { paths } = this.context;
    for (let index = 0; index < paths.length; index++) {
      // An index mark has no second state to speak of.
      if (this.means[index]!.look(nowS) && paths[index]!.channel.role !== 'Z')
        this.judge(paths[index]!, index, nowS);
      this.latches[index]!.rest(nowS, this.means[index]!.looksS);
    }
  }

  private judge(path: ChannelPath, index: number, nowS: number): void {
    const means = this.means[index]!;
    if (means.ramps || !(means.duty > 0 && means.duty < 1)) return;
    const latch = this.latches[index]!;
    const { usual, own } = this.usualDuty(index);
    const shift = means.duty - usual;
    const least = own ? opensAt : opensBesideAt;
    const limit = latch.open ? staysAt : Math.max(least, errors * means.dutyError);
    // A fitted band that makes room for a weak tooth moves the duty of all others by itself.
    const shifted = Math.abs(shift) > limit && means.bandOff < mostOff && this.swingIsUsual(index);
    const fromHalf = means.duty - 0.5;
    const unequal =
      path.channel.sensor.kind === 'latch' && Math.abs(fromHalf) > (latch.open ? latchStaysAt : latchOpensAt);
    this.seen[index] = shifted || unequal ? this.seen[index]! + 1 : 0;
    // A speed that is new while the duty is on its way must not take that for usual.
    const strange = !own && Math.abs(shift) > staysAt;
    if (!shifted && !strange && !latch.open && means.steady && means.bandStays) this.learn(index);
    if (this.seen[index] === 0 || (!latch.open && this.seen[index]! < looksToOpen)) return;
    const evidence: Evidence = shifted
      ? { duty: means.duty, usualDuty: usual, shift, toothHz: means.toothHz }
      : { duty: means.duty, expectedDuty: 0.5, toothHz: means.toothHz };
    const size = Math.abs(shifted ? shift : fromHalf);
    const severity = size > (shifted ? 0.15 : 0.35) ? 'fault' : 'warn';
    const seen = { fromS: means.fromS, atS: means.fromS, severity, evidence } as const;
    latch.raiseSized(findingOf('duty-shift', path.channel.name, seen), size, nowS);
  }

  /** While the finding is open, any speed will do: a fault must not become the usual thing of a new one. */
  private usualDuty(index: number): { usual: number; own: boolean } {
    const { direction } = this.context.motion;
    const { toothHz } = this.means[index]!;
    const duties = this.duties[index]!;
    const usual = duties.usual(direction, toothHz);
    if (!Number.isNaN(usual)) return { usual, own: true };
    const nearHz = this.latches[index]!.open ? duties.nearestHz(direction, toothHz) : NaN;
    const beside = Number.isNaN(nearHz)
      ? duties.usualBeside(direction, toothHz)
      : duties.usual(direction, nearHz);
    return { usual: beside, own: false };
  }

  private swingIsUsual(index: number): boolean {
    const { toothHz, swingV } = this.means[index]!;
    const usual = this.swings[index]!.usual(this.context.motion.direction, toothHz);
    // Noise at rest, not teeth, was learnt before.
    if (swingV > farLarger * usual) {
      this.swings[index]!.forget();
      this.duties[index]!.forget();
      return false;
    }
    return Number.isNaN(usual) || Math.abs(swingV / usual - 1) < swingShare;
  }

  private learn(index: number): void {
    const { direction } = this.context.motion;
    const { toothHz, duty, swingV } = this.means[index]!;
    this.duties[index]!.learn(direction, toothHz, duty);
    this.swings[index]!.learn(direction, toothHz, swingV);
  }
}
