/**
 * The wheel as each channel of the arrangement sees it: which pulse is which tooth, places that stayed empty, pulses too
 * many. The first channel's is the motion's own; the others' teeth are read from their logs at ticks.
 *
 * A pulse too many may look like two steps the wrong way to a ring of states, so that the motion begins anew at each. Such
 * pulses are therefore looked for in the logs, for the first channel too.
 */
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { WheelLogReader } from '@/signal/findings/wheel-log-reader';
import type { WheelLane } from '@/signal/findings/wheel-log-reader';
import { numberingOf } from '@/signal/findings/wheel-look';
import { mostPositions } from '@/signal/wheel-face-meter';

export class WheelLanes implements FindingRule {
  readonly latches = [];
  /** None on a wheel with so many positions that no single tooth is judged. */
  readonly lanes: readonly WheelLane[];
  /** The same channels, where the motion's own forgetting is no matter. */
  readonly logs: readonly WheelLane[];
  /** Since when the first channel's teeth have been counted without a break, s; Infinity: they are not. */
  countedSinceS = Infinity;
  private readonly context: RuleContext;
  private readonly readers: WheelLogReader[];
  private readonly missedBefore: number[];

  constructor(context: RuleContext) {
    const { motion, paths, lanes, rig } = context;
    const { pulsesPerTurn, missingPulses } = rig.wheel;
    const { face, placer } = motion.train;
    const { tracker, extras } = placer;
    const known = face && pulsesPerTurn <= mostPositions ? lanes.flatMap((index) => paths[index] ?? []) : [];
    this.context = context;
    this.readers =
      known.length > 1 ? known.map((path) => new WheelLogReader(path, pulsesPerTurn, missingPulses)) : [];
    const own: WheelLane[] = known.slice(0, 1).map((path) => ({
      path,
      tracker,
      extras,
      absence: face!.absence,
      counts: face!.counts,
      numberOf: (position) => face!.numberOf(position),
      get numbering() {
        return numberingOf(face!);
      },
    }));
    this.lanes = [...own, ...this.readers.slice(1)];
    this.logs = this.readers.length > 0 ? this.readers : own;
    this.missedBefore = this.lanes.map(() => 0);
  }

  tick(nowS: number): void {
    const { motion } = this.context;
    for (const reader of this.readers) reader.read(motion.direction === 'stopped', motion.reversed);
    if (!this.logs[0]?.tracker.isLocked) this.countedSinceS = Infinity;
    else if (this.countedSinceS === Infinity) this.countedSinceS = nowS;
    for (let i = 0; i < this.lanes.length; i++) {
      const { tracker, path } = this.lanes[i]!;
      if (tracker.gaps.missedTeeth !== this.missedBefore[i]) path.toothMissed();
      this.missedBefore[i] = tracker.gaps.missedTeeth;
    }
  }
}
