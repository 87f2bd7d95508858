/** What stands behind the speed, as plain values: acceleration, what was learnt of the wheel, sync, index, false steps. */
import type { IndexWatch } from '@/signal/index-watch';
import type { Settings } from '@/signal/model';
import type { Motion } from '@/signal/motion';
import type { ShaftStatus } from '@/signal/pipeline-types';
import { speedLimits } from '@/signal/speed-limits';

/**
 * As of the last edge; null for each number that is not known (yet).
 * @param speed how the speed is taken, for its limits. @param indexWatch null for a rig without an index channel.
 */
export function shaftStatus(
  motion: Motion,
  speed: Settings['speed'],
  rateHz: number,
  indexWatch: IndexWatch | null,
): ShaftStatus {
  const { train, tracker, rig } = motion;
  const { sync, pitch } = train;
  return {
    accelerationRpmPerS: known(train.accelerationRpmPerS),
    accelerationErrorRpmPerS: known(train.accelerationErrorRpmPerS),
    limits: speedLimits(rig, speed, rateHz, known(train.rpm)),
    pitch: { state: pitch.state, turns: pitch.turns, turnsNeeded: pitch.turnsNeeded, uneven: pitch.uneven },
    sync:
      sync.missing > 0
        ? { state: sync.state, lostBecause: sync.lostBecause, gapRatio: known(sync.gapRatio) }
        : null,
    index: indexWatch && {
      expectedCounts: indexWatch.expected,
      meanCounts: known(indexWatch.meanCounted),
      exactTurns: indexWatch.exactTurns,
      lostTurns: indexWatch.lostTurns,
      extraTurns: indexWatch.extraTurns,
    },
    falseSteps: tracker && { illegal: tracker.illegalSteps, invalidStates: tracker.invalidStates },
  };
}

function known(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}
