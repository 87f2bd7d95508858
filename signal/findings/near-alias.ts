import { consequencesOf, statesPerCycle } from '@/signal/consequences';
import { lanePhases, ringWidths } from '@/signal/findings/lane-phases';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import type { UnseenTeeth } from '@/signal/findings/unseen-teeth';
import { wordsFor } from '@/signal/finding-words';
import type { Finding } from '@/signal/model';
import { stepTable } from '@/signal/step-table';
import { readableFrom } from '@/signal/tooth-log';

const everyS = 0.5;
/** Samples a tooth, and of the shortest state; what is open stays until there are a tenth more. */
const warnBelow = 10;
const faultBelow = 5;
const warnBelowInState = 2;
const faultBelowInState = 1;
const staysBy = 1.1;
/** Samples of the narrowest coded pulse. */
const leastPerPulse = 4;
const teethNeeded = 16;

type Seen = {
  severity: Finding['severity'];
  outcome?: Finding['outcome'];
  evidence: Record<string, number | string>;
  atS: number;
};

/**
 * Too few samples a tooth, so that teeth go by between two of them. What is above half the sample rate folds down and
 * cannot be seen at all: the remedy says how to tell. That it will be so at rated speed is a note.
 */
export class NearAliasRule implements FindingRule {
  readonly latches = [new FindingLatch(2)];
  private readonly context: RuleContext;
  private readonly unseen: UnseenTeeth;
  private dueS = -Infinity;

  constructor(context: RuleContext, unseen: UnseenTeeth) {
    this.context = context;
    this.unseen = unseen;
  }

  tick(nowS: number): void {
    if (nowS >= this.dueS) {
      this.dueS = nowS + everyS;
      const seen = this.pulses(nowS) ?? this.measured(nowS) ?? this.tooFast() ?? this.rated(nowS);
      if (seen) this.raise(seen, nowS);
    }
    this.latches[0]!.rest(nowS);
  }

  private raise({ severity, outcome = 'found', evidence, atS }: Seen, nowS: number): void {
    const { paths, primary, lanes } = this.context;
    // The rate is the same for all channels.
    const channel = lanes.length > 1 ? null : paths[primary]!.channel.name;
    this.latches[0]!.raise(
      {
        code: 'near-alias',
        channel,
        from: atS,
        severity,
        outcome,
        at: atS,
        evidence,
        ...wordsFor('near-alias', channel, evidence),
        causedBy: null,
      },
      nowS,
    );
  }

  /** Widths that the rate cannot tell: known without any signal. */
  private pulses(nowS: number): Seen | null {
    const { rig, rateHz } = this.context;
    const { widthClasses } = rig.wheel;
    if (rig.sensing !== 'width-coded' || !widthClasses || widthClasses.length === 0) return null;
    const widthS = Math.min(...widthClasses.map((one) => one.widthS));
    const perPulse = widthS * rateHz;
    if (perPulse >= leastPerPulse) return null;
    return {
      severity: 'fault',
      evidence: { narrowestPulseS: widthS, samplesPerPulse: perPulse, neededHz: leastPerPulse / widthS },
      atS: nowS,
    };
  }

  /** So few that no edge comes of them. */
  private tooFast(): Seen | null {
    const { unseen, context } = this;
    const seen = unseen.of(context.primary);
    if (seen?.why !== 'fast') return null;
    const { hz, swingV, fromS } = seen;
    const evidence = {
      samplesPerTooth: context.rateHz / hz,
      swingV,
      apparentHz: hz,
      neededHz: warnBelow * hz,
    };
    return { severity: 'fault', outcome: 'cannot-tell', evidence, atS: fromS };
  }

  private measured(nowS: number): Seen | null {
    const { context } = this;
    const { rig, rateHz } = context;
    const { log } = context.paths[context.primary]!;
    const open = this.latches[0]!.open;
    const last = log.count - 1;
    const first = last - teethNeeded;
    if (first < readableFrom(log, 0)) return null;
    const lastS = log.riseS[last & log.mask]!;
    const meanS = (lastS - log.riseS[first & log.mask]!) / teethNeeded;
    if (meanS * rateHz > this.enough()) return null;
    const perToothS = this.toothS(first);
    if (Number.isNaN(perToothS) || nowS - lastS > 4 * perToothS + context.settleS) return null;
    const perTooth = perToothS * rateHz;
    const perState = perTooth * this.narrowestShare();
    const stays = open && open.severity !== 'note' ? staysBy : 1;
    const staysFault = open?.severity === 'fault' ? staysBy : 1;
    const isFault = perTooth < faultBelow * staysFault || perState < faultBelowInState * staysFault;
    if (!isFault && perTooth >= warnBelow * stays && perState >= warnBelowInState * stays) return null;
    const { pulsesPerTurn, gearRatio } = rig.wheel;
    return {
      severity: isFault ? 'fault' : 'warn',
      evidence: {
        samplesPerTooth: perTooth,
        samplesOfNarrowestState: perState,
        toothHz: 1 / perToothS,
        speedRpm: 60 / (perToothS * pulsesPerTurn * gearRatio),
      },
      atS: lastS,
    };
  }

  /** With so many samples a tooth on average nothing needs a closer look. */
  private enough(): number {
    const { paths, primary, rig } = this.context;
    const { sensing, wheel } = rig;
    const { duty } = paths[primary]!;
    // States of a ring are never taken for narrower than half of an even one.
    const share = sensing === 'single' ? Math.min(duty, 1 - duty) : 0.5 / statesPerCycle(sensing);
    const least = Math.max(warnBelow, warnBelowInState / share) * staysBy;
    return (wheel.missingPulses > 0 ? 1.5 : 1.1) * least;
  }

  /** Mean of the last teeth; NaN where the shaft speeds up or slows down, or where bounce comes between. */
  private toothS(first: number): number {
    const { log } = this.context.paths[this.context.primary]!;
    const { missingPulses } = this.context.rig.wheel;
    const half = teethNeeded / 2;
    const at = (tooth: number) => log.riseS[tooth & log.mask]!;
    const before = at(first + half) - at(first);
    const after = at(first + teethNeeded) - at(first + half);
    const ratio = missingPulses > 0 ? 2 : 1.25;
    if (!(before < ratio * after && after < ratio * before)) return NaN;
    const intervals = Array.from({ length: teethNeeded }, (_, k) => at(first + k + 1) - at(first + k));
    intervals.sort((a, b) => a - b);
    const median = (intervals[half - 1]! + intervals[half]!) / 2;
    // On the sample grid an interval is a sample longer or shorter than the next.
    const gridS = 1 / this.context.rateHz;
    if (intervals[0]! < 0.5 * median - gridS) return NaN;
    const whole = intervals.filter((one) => one < 1.6 * median + gridS);
    return whole.reduce((sum, one) => sum + one, 0) / whole.length;
  }

  /** The narrowest state, as share of a tooth; an even one where the channels do not tell. */
  private narrowestShare(): number {
    const { context } = this;
    const { sensing } = context.rig;
    const even = 1 / statesPerCycle(sensing);
    if (sensing === 'width-coded') return even;
    const phases = lanePhases(context, teethNeeded, -Infinity);
    if (!phases) return even;
    const table = stepTable(sensing);
    if (!table) return Math.min(phases.duty[0]!, 1 - phases.duty[0]!);
    const widths = ringWidths(phases, table.weights);
    const valid = table.stepsPerCycle === 6 ? widths.subarray(1, 7) : widths;
    // Narrower still is no matter of the rate: a phase error or an inverted line, and said as such.
    return Math.max(Math.min(...valid) / 360, even / 2);
  }

  private rated(nowS: number): Seen | null {
    const { rig, settings, rateHz, motion } = this.context;
    const { ratedRpm } = rig;
    if (ratedRpm === null || Number.isNaN(motion.lastEdgeS)) return null;
    const { samplesPerTooth } = consequencesOf(rig, settings, rateHz);
    if (samplesPerTooth === null) return null;
    const perState = samplesPerTooth / statesPerCycle(rig.sensing);
    if (samplesPerTooth >= warnBelow && perState >= warnBelowInState) return null;
    return {
      severity: 'note',
      evidence: { samplesPerTooth, samplesOfNarrowestState: perState, ratedRpm },
      atS: nowS,
    };
  }
}
