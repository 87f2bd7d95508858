/** How a finding about one channel is put together, and which channels rules about teeth look at. */
import type { ChannelPath } from '@/signal/channel-path';
import { wordsFor } from '@/signal/finding-words';
import type { WordedCode } from '@/signal/finding-words';
import { FindingLatch } from '@/signal/findings/rule';
import type { RuleContext } from '@/signal/findings/rule';
import type { Finding, Filter, Settings } from '@/signal/model';

export type Seen = {
  fromS: number;
  atS: number;
  severity: Finding['severity'];
  outcome?: Finding['outcome'];
  evidence: Finding['evidence'];
};

/** Wording included. @param channel null where it is about several at once. */
export function findingOf(code: WordedCode, channel: string | null, seen: Seen): Omit<Finding, 'to'> {
  const { fromS, atS, severity, outcome = 'found', evidence } = seen;
  return {
    code,
    channel,
    from: fromS,
    severity,
    outcome,
    at: atS,
    evidence,
    ...wordsFor(code, channel, evidence),
    causedBy: null,
  };
}

/** Holds the numbers of the worst that was seen, so that the last look at a fault that goes does not belittle it. */
export class SizedLatch extends FindingLatch {
  private worst = 0;

  /** @param size by which one sight of the fault is worse than another. */
  raiseSized(finding: Omit<Finding, 'to'>, size: number, seenS: number): void {
    const { open } = this;
    const smaller = open !== null && open.outcome === finding.outcome && size < 0.8 * this.worst;
    if (open === null || open.outcome !== finding.outcome) this.worst = 0;
    this.worst = Math.max(this.worst, size);
    this.raise(smaller ? open : finding, seenS);
  }
}

/** Teeth a turn that pass this channel; NaN for one that carries anything else. */
export function teethPerTurn({ rig }: RuleContext, { channel }: ChannelPath): number {
  if (channel.role === 'aux') return NaN;
  if (channel.role === 'Z') return 1;
  return Math.max(1, rig.wheel.pulsesPerTurn - rig.wheel.missingPulses);
}

export function filtersOf({ filter }: Settings): readonly Filter[] {
  return Array.isArray(filter) ? filter : [filter];
}

/** True where the filter takes the mean level away, so that nothing is known of it. */
export function takesMiddleAway(settings: Settings): boolean {
  return filtersOf(settings).some(({ kind }) => kind === 'highpass' || kind === 'bandpass');
}
