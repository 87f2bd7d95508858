/** What silence since the last edge proves: the most that the shaft can turn at, and where the wheel can stand by now. */
import { noGapAhead } from '@/signal/gap-sync';
import type { Motion } from '@/signal/motion';

/** Largest number of positions that can still be silent after the last edge. */
function silentPositions({ tracker, train }: Motion): number {
  if (!tracker) {
    const { sync, placer, uneven } = train;
    const places = noGapAhead(sync) ? 1 : sync.missing + 1;
    const nextIsWeak = train.synced && placer.nextIsOftenMissed();
    return (places + (nextIsWeak ? 1 : 0)) * Math.max(1, uneven.widestPitch);
  }
  const even = 1 / tracker.table.stepsPerCycle;
  const { widestState } = train.uneven;
  return Number.isNaN(widestState) ? 2 * even : Math.min(1, Math.max(even, 1.1 * widestState));
}

/**
 * Falling bound, rpm, at `nowS`: 60 p / (N gear elapsed), p the positions that can be silent. NaN before any edge.
 * @param latencyS how long after its instant an edge is known: silence is proven only up to `nowS` less that.
 */
export function speedAtMostRpm(motion: Motion, nowS: number, latencyS: number): number {
  const { tracker, train, rig, lastEdgeS, state } = motion;
  const since = tracker ? lastEdgeS : train.lastRiseS;
  if (Number.isNaN(lastEdgeS)) return NaN;
  const elapsed =
    state === 'stopped'
      ? motion.stoppedAfterS
      : nowS - latencyS - (Number.isNaN(since) ? motion.quietSinceS : Math.max(since, 0));
  const { pulsesPerTurn, gearRatio } = rig.wheel;
  return (60 * silentPositions(motion)) / (pulsesPerTurn * gearRatio * Math.max(elapsed, 0));
}

/** Angle of the wheel at `nowS`, degrees; NaN where not known. */
export function angleDeg({ train, rig, reversed }: Motion, nowS: number): number {
  if (Number.isNaN(train.lastRiseS) || !train.synced || train.lastPosition < 0) return NaN;
  const { pulsesPerTurn, missingPulses, gearRatio } = rig.wheel;
  const since = Number.isNaN(train.rpm)
    ? 0
    : (train.rpm / 60) * gearRatio * pulsesPerTurn * (nowS - train.lastRiseS);
  const passed = train.lastPosition + Math.min(1, Math.abs(since));
  // In reverse the first tooth after the gap is the last one of the wheel.
  const place = reversed ? (missingPulses > 0 ? pulsesPerTurn - missingPulses - 1 : 0) - passed : passed;
  const angle = (360 * place) / pulsesPerTurn;
  return ((angle % 360) + 360) % 360;
}
