import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { wordsFor } from '@/signal/finding-words';
import { restartIntervals } from '@/signal/interval-meter';

/** Share of counted teeth that came too soon, each beside a whole one: opens the finding, and keeps it. */
const opensAt = 0.05;
const staysAt = 0.02;
const windowS = 0.3;
const fewestTeeth = 8;
/** A sudden stop makes one such pair, not several. */
const fewestShort = 3;

/** Edges that the flank's ringing, bounce or noise made are counted as teeth: the speed reads too high. */
export class EdgeBounceRule implements FindingRule {
  readonly latches = [new FindingLatch(2)];
  private readonly context: RuleContext;
  private fromS = NaN;

  constructor(context: RuleContext) {
    this.context = context;
  }

  tick(nowS: number): void {
    const latch = this.latches[0]!;
    const { motion, paths, primary } = this.context;
    const { intervals } = motion.train;
    if (Number.isNaN(this.fromS)) this.fromS = nowS;
    if (!(nowS - this.fromS >= windowS) || intervals.counted < fewestTeeth) {
      latch.rest(nowS);
      return;
    }
    const share = intervals.short / intervals.counted;
    if (intervals.short >= fewestShort && share > (latch.open ? staysAt : opensAt)) {
      const { channel } = paths[primary]!;
      const evidence = {
        shortPercent: 100 * share,
        shortestS: intervals.shortestS,
        toothS: intervals.toothS,
      };
      latch.raise(
        {
          code: 'edge-bounce',
          channel: channel.name,
          from: this.fromS,
          severity: 'fault',
          outcome: 'found',
          at: intervals.lastShortT,
          evidence,
          ...wordsFor('edge-bounce', channel.name, evidence),
          causedBy: null,
        },
        nowS,
      );
    }
    latch.rest(nowS);
    restartIntervals(intervals);
    this.fromS = nowS;
  }

  gap(): void {
    this.fromS = NaN;
    restartIntervals(this.context.motion.train.intervals);
  }
}
