import type { ChannelPath } from '@/signal/channel-path';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { wordsFor } from '@/signal/finding-words';

/** So many edges of another channel without one of its own. */
const otherEdgesNeeded = 12;

/**
 * A channel that makes no edge while another one does; or a linear sensor that rests at the very end of its range (it
 * rests at its quiescent voltage when sound), flat, for as long as it takes to be called stopped. A flat signal anywhere
 * else may just be a shaft that stands still: no finding.
 */
export class DeadChannelRule implements FindingRule {
  readonly latches: FindingLatch[];
  private readonly context: RuleContext;
  /** Edges of each channel when the judged one last made one. */
  private readonly marks: number[][];
  private readonly ownEdges: number[];
  private readonly quietFromS: number[];
  private readonly flatFromS: number[];

  constructor(context: RuleContext) {
    this.context = context;
    this.latches = context.paths.map(() => new FindingLatch(0));
    this.marks = context.paths.map(() => context.paths.map(() => 0));
    this.ownEdges = context.paths.map(() => 0);
    this.quietFromS = context.paths.map(() => NaN);
    this.flatFromS = context.paths.map(() => NaN);
  }

  tick(nowS: number): void {
    this.context.paths.forEach((path, index) => {
      if (!this.besideOthers(path, index, nowS)) this.alone(path, index, nowS);
    });
  }

  gap(): void {
    this.quietFromS.fill(NaN);
    this.flatFromS.fill(NaN);
  }

  private besideOthers(path: ChannelPath, index: number, nowS: number): boolean {
    const { paths } = this.context;
    const latch = this.latches[index]!;
    if (path.edgeCount !== this.ownEdges[index] || Number.isNaN(this.quietFromS[index]!)) {
      this.ownEdges[index] = path.edgeCount;
      this.quietFromS[index] = nowS;
      paths.forEach((other, k) => (this.marks[index]![k] = other.edgeCount));
      latch.rest(nowS);
      return false;
    }
    // An index channel comes once a turn, an aux channel may carry anything.
    if (path.channel.role === 'Z' || path.channel.role === 'aux') return true;
    let most = 0;
    let busiest = -1;
    paths.forEach((other, k) => {
      const edges = other.edgeCount - this.marks[index]![k]!;
      if (k === index || other.channel.role === 'Z' || other.channel.role === 'aux' || edges <= most) return;
      most = edges;
      busiest = k;
    });
    if (most < otherEdgesNeeded) return false;
    const evidence = {
      otherChannel: paths[busiest]!.channel.name,
      otherEdges: most,
      quietS: nowS - this.quietFromS[index]!,
    };
    this.raise(path, index, this.quietFromS[index]!, evidence, nowS);
    return true;
  }

  private alone(path: ChannelPath, index: number, nowS: number): void {
    const { supplyV, kind } = path.channel.sensor;
    const levelV = path.spreadHighV;
    const spreadV = path.spreadHighV - path.spreadLowV;
    if (!(spreadV >= 0)) return;
    path.restartSpread();
    const atEnd =
      kind === 'linear' &&
      supplyV !== null &&
      supplyV > 0 &&
      (levelV < 0.03 * supplyV || levelV > 0.97 * supplyV);
    if (!atEnd || spreadV > 0.02 * supplyV) {
      this.flatFromS[index] = NaN;
      if (this.latches[index]!.open?.evidence.otherEdges === undefined) this.latches[index]!.rest(nowS);
      return;
    }
    if (Number.isNaN(this.flatFromS[index]!)) this.flatFromS[index] = nowS;
    const from = this.flatFromS[index]!;
    if (nowS - from < this.context.settings.speed.stoppedAfterS) return;
    this.raise(path, index, from, { levelV, flatS: nowS - from }, nowS);
  }

  private raise(
    path: ChannelPath,
    index: number,
    fromS: number,
    evidence: Record<string, number | string>,
    nowS: number,
  ): void {
    this.latches[index]!.raise(
      {
        code: 'dead-channel',
        channel: path.channel.name,
        from: fromS,
        severity: 'fault',
        outcome: 'found',
        at: fromS,
        evidence,
        ...wordsFor('dead-channel', path.channel.name, evidence),
        causedBy: null,
      },
      nowS,
    );
  }
}
