import { ClockSkew } from '@/signal/clock-skew';
import { wordsFor } from '@/signal/finding-words';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleGap } from '@/signal/findings/rule';
import type { BoardNote } from '@/signal/pipeline-types';

/** Crystals are good for 100 ppm; what is beyond this is an RC oscillator or a wrong divider. */
const opensAtPpm = 300;
const staysAtPpm = 200;
const faultPpm = 3000;
const sigmas = 4;

/**
 * The board samples faster or slower than it declares, so that every speed is off by the same share. It takes half a
 * minute at least, and longer where the network is slow: blocks arrive with delays. In a kept capture nothing is known of
 * arrivals, and nothing is said.
 */
export class ClockDriftRule implements FindingRule {
  readonly latches = [new FindingLatch(10)];
  private readonly skew = new ClockSkew();

  note(note: BoardNote, nowS: number): void {
    if (note.kind !== 'arrival' || !this.skew.add(note.streamS, note.hubS)) return;
    const fit = this.skew.fit();
    if (!fit) return;
    const latch = this.latches[0]!;
    const size = Math.abs(fit.ppm);
    if (size < sigmas * fit.errorPpm || size < (latch.open ? staysAtPpm : opensAtPpm)) return;
    const evidence = {
      driftPpm: fit.ppm,
      errorPpm: fit.errorPpm,
      overS: fit.overS,
      speedErrorPercent: 1e-4 * fit.ppm,
    };
    latch.raise(
      {
        code: 'clock-drift',
        channel: null,
        from: Math.max(0, nowS - fit.overS),
        severity: size > faultPpm ? 'fault' : 'warn',
        outcome: 'found',
        at: nowS,
        evidence,
        ...wordsFor('clock-drift', null, evidence),
        causedBy: null,
      },
      nowS,
    );
  }

  tick(nowS: number): void {
    this.latches[0]!.rest(nowS);
  }

  gap(gap: RuleGap): void {
    // The length of such a gap is a guess, and the stream's time jumps with it.
    if (gap.estimated) this.skew.restart();
  }
}
