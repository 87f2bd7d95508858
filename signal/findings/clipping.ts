import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { wordsFor } from '@/signal/finding-words';
import { restartRails } from '@/signal/rail-meter';

/** Share of the samples at a rail that opens the finding, and the one below which it starts to rest. */
const opensAt = 0.05;
const staysAt = 0.025;
const windowS = 0.5;
const leastChecked = 20;

/** A linear sensor's signal stands at an end of its range. On a switching sensor that is what it does for a living. */
export class ClippingRule implements FindingRule {
  readonly latches: FindingLatch[];
  private readonly context: RuleContext;
  private readonly windowFromS: number[];

  constructor(context: RuleContext) {
    this.context = context;
    this.latches = context.paths.map(() => new FindingLatch(2));
    this.windowFromS = context.paths.map(() => NaN);
  }

  tick(nowS: number): void {
    this.context.paths.forEach((path, index) => {
      const latch = this.latches[index]!;
      const meter = path.rails;
      const from = this.windowFromS[index]!;
      if (meter && Number.isNaN(from)) this.windowFromS[index] = nowS;
      if (!meter || !(nowS - from >= windowS) || meter.checked < leastChecked) {
        latch.rest(nowS);
        return;
      }
      const share = (meter.atLow + meter.atHigh) / meter.checked;
      // A signal that never leaves the rail is a dead channel, not a clipped one.
      const moves = path.spreadHighV - path.spreadLowV > 0.05 * (meter.highV - meter.lowV) || share < 0.95;
      if (moves && share > (latch.open ? staysAt : opensAt)) {
        const high = meter.atHigh >= meter.atLow;
        const evidence = {
          rail: high ? 'upper' : 'lower',
          railV: high ? meter.highV : meter.lowV,
          railPercent: 100 * share,
        };
        latch.raise(
          {
            code: 'clipping',
            channel: path.channel.name,
            from,
            severity: share > 0.2 ? 'fault' : 'warn',
            outcome: 'found',
            at: meter.lastAt / this.context.rateHz,
            evidence,
            ...wordsFor('clipping', path.channel.name, evidence),
            causedBy: null,
          },
          nowS,
        );
      }
      latch.rest(nowS);
      restartRails(meter);
      this.windowFromS[index] = nowS;
    });
  }

  gap(): void {
    this.windowFromS.fill(NaN);
    for (const { rails } of this.context.paths) if (rails) restartRails(rails);
  }
}
