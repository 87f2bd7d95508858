/** When intervals between pulses are whole pitches of the wheel. */

/** Two intervals are alike within this ratio. */
const alikeWithin = 1.25;
/** Two pulses are a pitch apart within these shares of the pitch before. */
const regularFrom = 0.7;
const regularTo = 1.4;
/** How far from a whole number of pitches one, and a stretch of more, may be. */
const offSingle = 0.35;
const offStretch = 0.25;
const offPerPitch = 0.06;
const offAtMost = 0.45;
/** Longer silence is a shaft that paused: more teeth in a row do not go missing. */
export const mostEmpty = 3;

export function isAlike(a: number, b: number): boolean {
  return a < alikeWithin * b && b < alikeWithin * a;
}

export function isRegular(intervalS: number, pitchS: number): boolean {
  return intervalS > regularFrom * pitchS && intervalS < regularTo * pitchS;
}

/**
 * @param room positions that may be passed beside a tooth and those that fail: the wheel's gap, and what waits within.
 * @param isLoose the pitch is well known, so that a tooth at an end of the stretch may stand off as far as a single one.
 * @returns the whole number that it is near; 0 where it is near none, or that would be too many without a tooth.
 */
export function wholePitches(pitches: number, room: number, isLoose: boolean): number {
  const whole = Math.round(pitches);
  if (whole < 1 || whole > room + 1 + mostEmpty) return 0;
  const stretch = Math.min(offAtMost, Math.max(isLoose ? offSingle : offStretch, offPerPitch * whole));
  return Math.abs(pitches - whole) <= (whole === 1 ? offSingle : stretch) ? whole : 0;
}
