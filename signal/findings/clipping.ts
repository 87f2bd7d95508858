import type { ChannelPath } from '@/signal/channel-path';
import { SizedLatch, findingOf } from '@/signal/findings/channel-finding';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { pileIn, restartRails } from '@/signal/rail-meter';
import type { RailMeter } from '@/signal/rail-meter';

/** Share of the samples at one end that opens the finding, and the one below which it starts to rest. */
const opensAt = 0.05;
const staysAt = 0.025;
/** What piles up before the rail of the sensor, where nobody knows how far it goes: a sine that just reaches it has less. */
const pileOpensAt = 0.08;
const pileStaysAt = 0.04;
const windowS = 0.5;
const leastChecked = 20;
/** Since the last time that the signal came to an end and left it again, s: slow teeth fill whole windows. */
const visitS = 4;

type Cut = { end: 'upper' | 'lower'; levelV: number; share: number; by: 'converter' | 'sensor' };

/**
 * A linear sensor's signal comes to an end of its range and is cut off there. On a switching sensor that is what it does
 * for a living; a channel that never leaves the end is dead, not clipped; and a sensor that rests there by design does so.
 */
export class ClippingRule implements FindingRule {
  readonly latches: SizedLatch[];
  private readonly context: RuleContext;
  private readonly windowFromS: number[];
  private readonly visits: number[];
  private readonly visitedS: number[];

  constructor(context: RuleContext) {
    const { paths } = context;
    this.context = context;
    this.latches = paths.map(() => new SizedLatch(2));
    this.windowFromS = paths.map(() => NaN);
    this.visits = paths.map(() => 0);
    this.visitedS = paths.map(() => -Infinity);
  }

  tick(nowS: number): void {
    const { paths } = this.context;
    for (let index = 0; index < paths.length; index++) {
      const path = paths[index]!;
      if (path.rails) this.look(path, path.rails, index, nowS);
      this.latches[index]!.rest(nowS);
    }
  }

  gap(): void {
    this.windowFromS.fill(NaN);
    for (const { rails } of this.context.paths) if (rails) restartRails(rails);
  }

  private look(path: ChannelPath, meter: RailMeter, index: number, nowS: number): void {
    const fromS = this.windowFromS[index]!;
    if (Number.isNaN(fromS)) this.windowFromS[index] = nowS;
    if (meter.visits !== this.visits[index]) {
      this.visits[index] = meter.visits;
      this.visitedS[index] = nowS;
    }
    if (!(nowS - fromS >= windowS) || meter.checked < leastChecked) return;
    const latch = this.latches[index]!;
    const cut = worstCut(path, meter, latch.open !== null);
    if (cut && nowS - this.visitedS[index]! < visitS) {
      const { end, levelV, share, by } = cut;
      const evidence = { rail: end, railV: levelV, railPercent: 100 * share, cutBy: by };
      const severity = share > 0.2 ? 'fault' : 'warn';
      const seen = { fromS, atS: meter.lastAt / this.context.rateHz, severity, evidence } as const;
      latch.raiseSized(findingOf('clipping', path.channel.name, seen), share, nowS);
    }
    restartRails(meter);
    this.windowFromS[index] = nowS;
  }
}

function worstCut(path: ChannelPath, meter: RailMeter, open: boolean): Cut | null {
  const cuts = [
    converterCut(meter, 'upper', open),
    converterCut(meter, 'lower', open),
    sensorCut(path, meter, 'upper', open),
    sensorCut(path, meter, 'lower', open),
  ];
  return cuts.reduce((worst, cut) => (cut && cut.share > (worst?.share ?? 0) ? cut : worst), null);
}

function converterCut(meter: RailMeter, end: Cut['end'], open: boolean): Cut | null {
  const share = (end === 'upper' ? meter.atHigh : meter.atLow) / meter.checked;
  if (!(share > (open ? staysAt : opensAt))) return null;
  return { end, levelV: end === 'upper' ? meter.highV : meter.lowV, share, by: 'converter' };
}

function sensorCut({ channel }: ChannelPath, meter: RailMeter, end: Cut['end'], open: boolean): Cut | null {
  const pile = pileIn(meter, end === 'upper' ? 'high' : 'low');
  if (!pile) return null;
  const share = pile.count / meter.checked;
  const { quiescentV, supplyV } = channel.sensor;
  // Without field it rests there; where that is not known, the lower end is where sensors of one pole do.
  const rests =
    quiescentV === null ? end === 'lower' : Math.abs(pile.levelV - quiescentV) < 0.02 * (supplyV ?? 0);
  if (rests || !(share > (open ? pileStaysAt : pileOpensAt))) return null;
  return { end, levelV: pile.levelV, share, by: 'sensor' };
}
