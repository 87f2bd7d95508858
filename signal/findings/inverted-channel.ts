import { FlipWatch } from '@/signal/findings/flip-watch';
import { lanePhases, wholeTurns } from '@/signal/findings/lane-phases';
import type { LanePhases } from '@/signal/findings/lane-phases';
import { invertedOfPair, invertedOfThree } from '@/signal/findings/ring-places';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { wordsFor } from '@/signal/finding-words';
import { neededRoles } from '@/signal/validate-setup';

const everyS = 0.5;
/** How well a jump of half a tooth is told, teeth. */
const halfWithin = 0.15;

/**
 * One line shows high for low. Three lines then pass 000 and 111 and never two of the valid states; a pair turns the other
 * way, which its duties tell where they are mirror images, and its rows of teeth where the line turns over while the shaft
 * turns. A pair of even duties that was so from the start cannot tell (see `direction-flip`).
 */
export class InvertedChannelRule implements FindingRule {
  readonly latches = [new FindingLatch(2)];
  private readonly context: RuleContext;
  private readonly watch: FlipWatch | null;
  private dueS = -Infinity;
  /** The one of a pair that was seen to turn over, and when; -1: none. */
  private turnedLane = -1;
  private turnedS = NaN;
  private isCertain = false;
  private invalid = 0;

  constructor(context: RuleContext) {
    this.context = context;
    this.watch = context.rig.sensing === 'quadrature' ? new FlipWatch(context) : null;
  }

  tick(nowS: number): void {
    const { sensing } = this.context.rig;
    if (this.watch) this.followFlips(this.watch, nowS);
    if ((sensing === 'quadrature' || sensing === 'three-hall') && nowS >= this.dueS) {
      this.dueS = nowS + everyS;
      const found = this.mayBeInverted() ? invertedLine(this.context, nowS) : null;
      if (found) this.raise(found, nowS);
      else if (this.turnedLane >= 0) this.raiseTurned(nowS);
    }
    this.latches[0]!.rest(nowS);
  }

  gap(): void {
    this.watch?.gap();
    this.turnedLane = -1;
  }

  /** Three lines: states came that never should; a pair: its running duties lean to either side. */
  private mayBeInverted(): boolean {
    const { motion, paths, lanes, rig } = this.context;
    if (rig.sensing === 'three-hall') {
      const invalid = motion.tracker?.invalidStates ?? 0;
      const isFresh = invalid !== this.invalid;
      this.invalid = invalid;
      return isFresh;
    }
    const a = paths[lanes[0]!]!.duty - 0.5;
    const b = paths[lanes[1]!]!.duty - 0.5;
    return a * b < 0 && Math.min(Math.abs(a), Math.abs(b)) > 0.03;
  }

  /** A line that turns over takes its row of teeth half a tooth on, and leaves the other one's where it was. */
  private followFlips(watch: FlipWatch, nowS: number): void {
    watch.tick(nowS);
    if (this.context.motion.state === 'stopped') this.turnedLane = -1;
    for (const { t, jumps, isCertain } of watch.found) {
      const lane = jumps.findIndex((jump) => Math.abs(jump - 0.5) < halfWithin);
      const stays = jumps.some((jump) => Math.min(jump, 1 - jump) < halfWithin);
      if (lane < 0 || !stays) continue;
      this.turnedLane = lane === this.turnedLane ? -1 : lane;
      this.turnedS = t;
      this.isCertain = isCertain;
    }
  }

  private raiseTurned(nowS: number): void {
    const { context, turnedS } = this;
    const { expectedDirection } = context.rig;
    if (context.motion.direction === expectedDirection) return;
    const channel = context.paths[context.lanes[this.turnedLane]!]!.channel.name;
    const evidence = { turnedOverS: turnedS, reads: context.motion.direction, jumpPercentOfTooth: 50 };
    this.latches[0]!.raise(
      {
        code: 'inverted-channel',
        channel,
        from: turnedS,
        severity: 'fault',
        outcome: this.isCertain && expectedDirection !== null ? 'found' : 'cannot-tell',
        at: turnedS,
        evidence,
        ...wordsFor('inverted-channel', channel, evidence),
        causedBy: null,
      },
      nowS,
    );
  }

  private raise({ phases, lane }: InvertedLine, nowS: number): void {
    const { context } = this;
    const channel = lane === null ? null : context.paths[context.lanes[lane]!]!.channel.name;
    const names = context.lanes.map((index) => context.paths[index]!.channel.name);
    const evidence: Record<string, number | string> = { lines: names.join(', ') };
    neededRoles(context.rig).forEach((role, k) => {
      evidence[`${role.toLowerCase()}HighPercent`] = 100 * phases.duty[k]!;
      if (k > 0) evidence[`${role.toLowerCase()}BehindDeg`] = phases.riseDeg[k]!;
    });
    this.latches[0]!.raise(
      {
        code: 'inverted-channel',
        channel,
        from: phases.fromS,
        severity: 'fault',
        outcome: 'found',
        at: phases.toS,
        evidence,
        ...wordsFor('inverted-channel', channel, evidence),
        causedBy: null,
      },
      nowS,
    );
  }
}

/** `lane` null: one of the pair, and the data do not say which. */
export type InvertedLine = { lane: number | null; phases: LanePhases };

/** What the last turns say of an inverted line, for this rule and for the one that explains a wrong direction. */
export function invertedLine(context: RuleContext, nowS: number): InvertedLine | null {
  const { rig, motion } = context;
  const phases = lanePhases(context, wholeTurns(rig.wheel), -Infinity);
  if (!phases || nowS - phases.toS > 4 * phases.periodS + context.settleS) return null;
  if (rig.sensing === 'three-hall') {
    const found = invertedOfThree(phases);
    return found && { lane: found.lane, phases };
  }
  // Turning as it should, whatever its lines are like.
  if (rig.expectedDirection !== null && motion.direction === rig.expectedDirection) return null;
  const found = invertedOfPair(phases, context);
  return found && { lane: found.lane, phases };
}
