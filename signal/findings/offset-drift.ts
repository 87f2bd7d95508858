import type { ChannelPath } from '@/signal/channel-path';
import { Baseline } from '@/signal/findings/baseline';
import { SizedLatch, findingOf, takesMiddleAway } from '@/signal/findings/channel-finding';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import type { TurnMeans } from '@/signal/findings/turn-means';

/**
 * Shares of the usual swing: middle, and what peaks and troughs have moved in common. A band at 0.4 and 0.6 of the swing
 * has then still half of its 0.4 on the near side; a real pulse sensor was seen to wander by 0.16 without harm.
 */
const opens = { middle: 0.18, common: 0.12 };
const stays = { middle: 0.12, common: 0.08 };
const faultShare = 0.3;
const farLarger = 3;
const looksForBaseline = 2;
const looksToOpen = 2;

/**
 * The middle of the signal has moved from where it was when the stream began. A gap that changes moves only the peaks of
 * a sensor that sees one pole, and a filter at higher speed draws both ends to the mean: neither is a drift, so that
 * peaks and troughs must have gone the same way. Nothing can be said behind a filter that takes the mean away.
 */
export class OffsetDriftRule implements FindingRule {
  readonly latches: SizedLatch[];
  private readonly context: RuleContext;
  private readonly means: readonly TurnMeans[];
  private readonly highs: Baseline[];
  private readonly lows: Baseline[];
  private readonly seen: number[];
  private readonly blind: boolean;

  constructor(context: RuleContext, means: readonly TurnMeans[]) {
    const { paths, settings } = context;
    this.context = context;
    this.latches = paths.map(() => new SizedLatch(2));
    this.means = means;
    this.highs = paths.map(() => new Baseline(looksForBaseline, false));
    this.lows = paths.map(() => new Baseline(looksForBaseline, false));
    this.seen = paths.map(() => 0);
    this.blind = takesMiddleAway(settings);
  }

  tick(nowS: number): void {
    if (this.blind) return;
    const { paths } = this.context;
    for (let index = 0; index < paths.length; index++) {
      if (this.means[index]!.look(nowS)) this.judge(paths[index]!, index, nowS);
      this.latches[index]!.rest(nowS, this.means[index]!.looksS);
    }
  }

  private judge(path: ChannelPath, index: number, nowS: number): void {
    const means = this.means[index]!;
    const latch = this.latches[index]!;
    const { direction } = this.context.motion;
    const { toothHz, highV, lowV } = means;
    const highs = this.highs[index]!;
    const lows = this.lows[index]!;
    const usualHighV = highs.usualEither(direction, toothHz);
    const usualLowV = lows.usualEither(direction, toothHz);
    const upV = highV - usualHighV;
    const lowUpV = lowV - usualLowV;
    const swingV = usualHighV - usualLowV;
    // A swing so much larger: noise at rest, not teeth, was learnt before.
    if (means.swingV > farLarger * swingV) {
      highs.forget();
      lows.forget();
    }
    // An end that has come to stand at the rail cannot go on with the other one.
    const held = endsAtRails(path, highV, lowV);
    const highMovedV = held.high && upV > 0.1 * swingV ? Math.max(upV, lowUpV) : upV;
    const lowMovedV = held.low && lowUpV < -0.1 * swingV ? Math.min(upV, lowUpV) : lowUpV;
    const common =
      highMovedV * lowMovedV > 0 ? Math.min(Math.abs(highMovedV), Math.abs(lowMovedV)) / swingV : 0;
    const share = Math.abs(highMovedV + lowMovedV) / 2 / swingV;
    const limits = latch.open ? stays : opens;
    const drifted = common > limits.common && share > limits.middle && means.swingV <= farLarger * swingV;
    this.seen[index] = drifted ? this.seen[index]! + 1 : 0;
    if (!drifted) {
      highs.learn(direction, toothHz, highV);
      lows.learn(direction, toothHz, lowV);
    }
    if (!latch.open && this.seen[index]! < looksToOpen) return;
    if (!drifted) return;
    const evidence = {
      middleV: means.middleV,
      usualMiddleV: (usualHighV + usualLowV) / 2,
      movedV: (highMovedV + lowMovedV) / 2,
      usualSwingV: swingV,
      ofSwingPercent: 100 * share,
    };
    const severity = share > faultShare ? 'fault' : 'warn';
    const seen = { fromS: means.fromS, atS: means.fromS, severity, evidence } as const;
    latch.raiseSized(findingOf('offset-drift', path.channel.name, seen), share, nowS);
  }
}

/** Which ends of the signal stand where the sensor or the converter lets them go no further. */
function endsAtRails({ rails }: ChannelPath, highV: number, lowV: number): { high: boolean; low: boolean } {
  if (!rails) return { high: false, low: false };
  const topV = Math.min(rails.highV, rails.zoneHighV);
  const bottomV = Math.max(rails.lowV, rails.zoneLowV);
  const near = 0.02 * (topV - bottomV);
  return { high: highV > topV - near, low: lowV < bottomV + near };
}
