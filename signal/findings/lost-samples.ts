import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleGap } from '@/signal/findings/rule';
import { wordsFor } from '@/signal/finding-words';

/** A fault where it lost more than this, s; less is a warning. */
const faultS = 0.1;

/** Samples that never arrived. Gaps less than 5 s apart are one finding. */
export class LostSamplesRule implements FindingRule {
  readonly latches = [new FindingLatch(5)];
  private lostSamples = 0;
  private lostS = 0;
  private gaps = 0;
  private estimated = false;

  gap(gap: RuleGap): void {
    const latch = this.latches[0]!;
    latch.rest(gap.fromS);
    if (!latch.open) {
      this.lostSamples = this.lostS = this.gaps = 0;
      this.estimated = false;
    }
    this.lostSamples += gap.lostSamples;
    this.lostS += gap.toS - gap.fromS;
    this.gaps++;
    this.estimated ||= gap.estimated;
    const evidence = {
      lostSamples: this.lostSamples,
      lostS: this.lostS,
      gaps: this.gaps,
      length: this.estimated ? 'estimated' : 'known',
    };
    latch.raise(
      {
        code: 'lost-samples',
        channel: null,
        from: gap.fromS,
        severity: this.lostS > faultS ? 'fault' : 'warn',
        outcome: 'found',
        at: gap.fromS,
        evidence,
        ...wordsFor('lost-samples', null, evidence),
        causedBy: null,
      },
      gap.toS,
    );
  }

  tick(nowS: number): void {
    this.latches[0]!.rest(nowS);
  }
}
