import { FlipWatch } from '@/signal/findings/flip-watch';
import { invertedLine } from '@/signal/findings/inverted-channel';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { hasTinyTeeth } from '@/signal/findings/tiny-teeth';
import { wordsFor } from '@/signal/finding-words';
import type { Finding } from '@/signal/model';

/** Changes less far apart than this are one finding, s. */
const holdS = 5;
/** So many of them, and it is a fault even where the direction always came back. */
const manyFlips = 4;
const turnsNeeded = 3;
const everyS = 0.5;

/**
 * The direction changed at speed without a slow-down on the way; or the shaft turns steadily against the direction that
 * the rig expects, which swapped channels, an inverted line and a shaft that really turns that way all look like.
 */
export class DirectionFlipRule implements FindingRule {
  readonly latches = [new FindingLatch(holdS), new FindingLatch(2)];
  private readonly context: RuleContext;
  private readonly watch: FlipWatch;
  private flips = 0;
  private isCertain = false;
  private againstFromS = NaN;
  private againstPulses = NaN;
  private against: number | null = null;
  private dueS = -Infinity;

  constructor(context: RuleContext) {
    this.context = context;
    this.watch = new FlipWatch(context);
  }

  tick(nowS: number): void {
    this.watch.tick(nowS);
    if (this.watch.found.length > 0 && !hasTinyTeeth(this.context)) this.raiseFlips(nowS);
    this.latches[0]!.rest(nowS);
    this.compareExpected(nowS);
    this.latches[1]!.rest(nowS);
  }

  gap(): void {
    this.watch.gap();
    this.against = null;
  }

  private raiseFlips(nowS: number): void {
    const latch = this.latches[0]!;
    const { found } = this.watch;
    if (!latch.open) {
      this.flips = 0;
      this.isCertain = false;
    }
    this.flips += found.length;
    this.isCertain ||= found.some(({ isCertain }) => isCertain);
    const last = found.at(-1)!;
    const { rig, paths, primary } = this.context;
    const evidence = {
      flips: this.flips,
      toothS: last.toothS,
      speedRpm: 60 / (rig.wheel.pulsesPerTurn * rig.wheel.gearRatio * last.toothS),
      neededRadPerS2: last.radPerS2,
      verdict: this.isCertain ? 'beyond any shaft' : 'perhaps a servo',
    };
    latch.raise(
      {
        code: 'direction-flip',
        channel: null,
        from: found[0]!.t,
        // An odd number leaves a direction that is wrong for good.
        severity: this.isCertain && (this.flips % 2 === 1 || this.flips >= manyFlips) ? 'fault' : 'warn',
        outcome: this.isCertain ? 'found' : 'cannot-tell',
        at: found[0]!.t,
        evidence,
        ...wordsFor('direction-flip', paths[primary]!.channel.name, evidence),
        causedBy: null,
      },
      nowS,
    );
  }

  private compareExpected(nowS: number): void {
    const { motion, rig } = this.context;
    const expected = rig.expectedDirection;
    const { direction } = motion;
    const isAgainst =
      expected !== null && direction !== expected && (direction === 'forward' || direction === 'reverse');
    if (!isAgainst) {
      this.against = null;
      return;
    }
    if (this.against === null) {
      this.against = 0;
      this.againstFromS = nowS;
      this.againstPulses = motion.pulses;
    }
    const turns = Math.abs(motion.pulses - this.againstPulses) / rig.wheel.pulsesPerTurn;
    if (turns < turnsNeeded || nowS < this.dueS) return;
    this.dueS = nowS + everyS;
    const inverted = invertedLine(this.context, nowS) !== null;
    const { paths, lanes } = this.context;
    const evidence: Finding['evidence'] = {
      turned: direction,
      expected,
      turns,
      duties: inverted ? 'mirrored' : 'alike',
    };
    if (lanes.length > 1) evidence.channels = lanes.map((index) => paths[index]!.channel.name).join(', ');
    this.latches[1]!.raise(
      {
        code: 'direction-flip',
        channel: null,
        from: this.againstFromS,
        severity: 'warn',
        outcome: inverted ? 'found' : 'cannot-tell',
        at: this.againstFromS,
        evidence,
        ...wordsFor('direction-flip', null, evidence),
        causedBy: null,
      },
      nowS,
    );
  }
}
