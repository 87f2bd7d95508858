/** What silence since the last edge proves: the most that the shaft can turn at, and where the wheel can stand by now. */
import type { Motion } from '@/signal/motion';

/** Standard errors by which an edge is presumed to be off, at most: the bound must hold on noisy signals too. */
const mostOff = 3;
/** The widest that was seen need not be the widest there is, and the way to the switching point is known to a hundredth of a pitch. */
const widerPitch = 1.02;
const widerState = 1.1;

/** Largest number of positions that can still be silent after the last edge. */
function silentPositions({ tracker, train, state: shaft }: Motion): number {
  const { uneven, edgeError } = train;
  const off = mostOff * Math.SQRT2 * edgeError;
  // The widest seen holds noise already: the two do not simply add up.
  if (!tracker) return train.silentPlaces * (1 + Math.hypot(widerPitch * uneven.widestPitch - 1, off));
  const places = shaft === 'stopped' ? train.silentAtEnd : train.silentPlaces;
  // In a gap of the wheel no line changes.
  return places - 1 + Math.min(1, widerState * uneven.widestState + off);
}

/**
 * Falling bound, rpm, at `nowS`: 60 p / (N gear elapsed), p the positions that can be silent. NaN before any edge, and where
 * the signal has swung since the last one though no edge came of it. Once stopped, and just before, it is the slowest speed
 * that can be told from standing: p over the time until stopped.
 * @param latencyS how long after its instant an edge is known: silence is proven only up to `nowS` less that.
 */
export function speedAtMostRpm(motion: Motion, nowS: number, latencyS: number): number {
  const { tracker, train, rig, lastEdgeS, state, stoppedAfterS, widths } = motion;
  // Pulses that fall between samples: silence proves nothing.
  if (Number.isNaN(lastEdgeS) || lastEdgeS < motion.doubtedS || widths?.isBlind) return NaN;
  const since = tracker ? lastEdgeS : train.lastRiseS;
  const begin = Number.isNaN(since) ? motion.quietSinceS : Math.max(since, 0);
  const { pulsesPerTurn, gearRatio } = rig.wheel;
  const perPosition = 60 / (pulsesPerTurn * gearRatio);
  const positions = silentPositions(motion);
  if (state === 'stopped') return (perPosition * (tracker ? positions : train.silentAtEnd)) / stoppedAfterS;
  return (perPosition * positions) / Math.min(stoppedAfterS, Math.max(nowS - latencyS - begin, 0));
}

/**
 * Standard error of the speed shown while silence holds it down to `atMostRpm`, in the sense of all others: two of it hold
 * what the shaft may turn at.
 *
 * What is shown is the bound, and nothing but standing still is certain below it, so that half of it holds everything. As
 * the bound begins to bite it contradicts the last speed by little: an edge that is a little late. Then the doubt is as far
 * as it has fallen below that speed, until, at two thirds of it, both meet.
 */
export function boundErrorRpm({ train }: Motion, atMostRpm: number): number {
  const fallen = Math.abs(train.rpm) - atMostRpm;
  return Math.max(Math.min(atMostRpm / 2, fallen), Math.min(atMostRpm / 2, train.errorRpm || 0));
}

/** Angle of the wheel at `nowS`, degrees; NaN where not known. */
export function angleDeg({ train, rig, reversed }: Motion, nowS: number): number {
  if (Number.isNaN(train.lastRiseS) || !train.synced || train.lastPosition < 0) return NaN;
  const { pulsesPerTurn, missingPulses, gearRatio } = rig.wheel;
  const since = Number.isNaN(train.rpm)
    ? 0
    : (train.rpm / 60) * gearRatio * pulsesPerTurn * (nowS - train.lastRiseS);
  const passed = train.lastPosition + Math.min(1, Math.abs(since));
  const shift = train.face?.numberShift ?? 0;
  // In reverse the first tooth after the gap is the last one of the wheel.
  const last = missingPulses > 0 ? pulsesPerTurn - missingPulses - 1 : shift;
  const place = reversed ? last - passed : passed - shift;
  const angle = (360 * place) / pulsesPerTurn;
  return ((angle % 360) + 360) % 360;
}
