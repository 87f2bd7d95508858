import { ChannelCounts, claimOfGap, claimOfIndex, simpleRatio } from '@/signal/findings/count-claims';
import type { CountClaim } from '@/signal/findings/count-claims';
import { heldFinding, HeldTeethWatch } from '@/signal/findings/held-teeth';
import type { HeldTeeth } from '@/signal/findings/held-teeth';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext, RuleGap } from '@/signal/findings/rule';
import type { WheelLanes } from '@/signal/findings/wheel-lanes';
import { wordsFor } from '@/signal/finding-words';
import { fewestPatternPositions, mostPatternPositions, WheelPattern } from '@/signal/wheel-pattern';

/** Between two looks at the wheel's pattern, s: wheels do not change, and a look costs as much as a few thousand edges. */
const restS = 120;

/**
 * The wheel has another number of teeth than it was set up with, so that the speed is off by a fixed ratio. Said only of what
 * slips turn after turn: against the index, against the wheel's own gap or pattern, or between channels.
 */
export class WrongCountRule implements FindingRule {
  readonly latches = [new FindingLatch(2)];
  private readonly context: RuleContext;
  private readonly wheels: WheelLanes;
  private readonly channels: ChannelCounts;
  private readonly pattern: WheelPattern | null;
  private readonly held: HeldTeethWatch;
  private lookFromS = 0;
  private disturbances = -1;

  constructor(context: RuleContext, wheels: WheelLanes) {
    const { pulsesPerTurn, missingPulses } = context.rig.wheel;
    this.context = context;
    this.wheels = wheels;
    this.channels = new ChannelCounts(context);
    this.held = new HeldTeethWatch(context);
    this.pattern =
      missingPulses === 0 && pulsesPerTurn >= fewestPatternPositions && pulsesPerTurn <= mostPatternPositions
        ? new WheelPattern(pulsesPerTurn, context.paths[context.primary]!.channel.sensor.kind === 'linear')
        : null;
  }

  tick(nowS: number): void {
    const latch = this.latches[0]!;
    const { context } = this;
    const claim =
      claimOfIndex(context, this.wheels.logs[0], nowS) ??
      claimOfGap(context, nowS) ??
      this.channels.claim(nowS) ??
      this.claimOfPattern(nowS);
    const held = this.held.look(nowS);
    if (held) this.raiseHeld(latch, held, nowS);
    // Teeth that were eaten make every other count wrong.
    else if (claim && latch.open?.evidence.by !== 'hold-off') this.raise(latch, claim, nowS);
    latch.rest(nowS, latch.open?.evidence.by === 'hold-off' ? this.held.looksS : 0);
  }

  gap({ toS }: RuleGap): void {
    this.channels.restart();
    this.held.restart(toS);
  }

  /** What has been sure stays so while the speed changes too much to tell. */
  private raiseHeld(latch: FindingLatch, held: HeldTeeth, nowS: number): void {
    const { open } = latch;
    const stays = !held.sure && open?.outcome === 'found' && open.evidence.by === 'hold-off';
    latch.raise(stays ? open : heldFinding(this.context, held), nowS);
  }

  private claimOfPattern(nowS: number): CountClaim | null {
    const { pattern, context } = this;
    if (!pattern) return null;
    const { motion, paths, primary } = context;
    const { log } = paths[primary]!;
    if (motion.calm.disturbances !== this.disturbances || motion.state !== 'running') {
      // What was found holds on only while the shaft turns on.
      this.disturbances = motion.calm.disturbances;
      pattern.restart(log);
      pattern.verdict = null;
      this.lookFromS = nowS;
      return null;
    }
    if (nowS >= this.lookFromS && pattern.read(log) && !pattern.verdict) {
      this.lookFromS = nowS + restS;
    } else if (nowS < this.lookFromS) {
      pattern.skip(log);
    }
    const { verdict } = pattern;
    if (!verdict) return null;
    return {
      by: verdict.by,
      foundTeeth: verdict.lag,
      setTeeth: context.rig.wheel.pulsesPerTurn,
      foundMissing: null,
      turns: verdict.turns,
      atS: nowS,
      evidence: { correlation: verdict.correlation, correlationAsSet: verdict.correlationAsSet },
    };
  }

  private raise(latch: FindingLatch, claim: CountClaim, nowS: number): void {
    const { rig, paths, primary, motion } = this.context;
    const { pulsesPerTurn, missingPulses } = rig.wheel;
    const { by, foundTeeth, foundMissing, turns, atS } = claim;
    // A gap tells the positions, all others the teeth.
    const found = foundMissing === null ? foundTeeth : foundTeeth + foundMissing;
    const set = foundMissing === null ? claim.setTeeth : pulsesPerTurn;
    const ratio = simpleRatio(found / set);
    const evidence = {
      by,
      setPulses: set,
      ...(foundMissing !== null && { setMissing: missingPulses, foundMissing }),
      ...(!Number.isNaN(found) && { foundPulses: found, speedTimes: found / set }),
      ...(ratio && found !== set && { ratio: `${ratio.p} : ${ratio.q}` }),
      turns,
      sensorKind: paths[primary]!.channel.sensor.kind,
      ...claim.evidence,
    };
    const isPart = (by === 'spacing' || by === 'swing') && set % found === 0;
    const turnS = motion.train.placer.tracker.pitchS * pulsesPerTurn;
    const outcome = isPart ? 'cannot-tell' : 'found';
    const { name } = paths[primary]!.channel;
    latch.raise(
      {
        code: 'wrong-count',
        channel: by === 'channels' ? String(claim.evidence?.channel) : name,
        from: Math.max(0, nowS - (turnS > 0 ? turns * turnS : 0)),
        severity: isPart ? 'note' : 'fault',
        outcome,
        at: atS,
        evidence,
        ...wordsFor('wrong-count', name, { ...evidence, outcome }),
        causedBy: null,
      },
      nowS,
    );
  }
}
