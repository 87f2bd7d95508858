/**
 * State levels of one channel as envelopes (peaks and troughs, so that narrow pulses count like any other), and the
 * fitted band that follows from them.
 *
 * Each accepted tooth moves its level by a quarter of what it differs, and by no more than an eighth of the swing: one
 * wild peak cannot lift the band over the teeth. A tooth less than four fifths as strong as the known swing moves it by
 * less, from a half down by a thirty-second only: a bounce just across the band would else pull both levels towards it, and
 * so invite the next. Where the shaft may turn to and fro such a tooth moves nothing: one that shakes cuts as many short as it
 * likes. Peaks that are not counted move nothing either, so levels stay where they are when the shaft stops.
 */
import type { Band, BandLevels } from '@/signal/model';
import { leastSigmas } from '@/signal/tooth-size';

export type Levels = {
  /** NaN: not known yet. */
  lowV: number;
  highV: number;
  /** How far the signal came back through mid on a flank lately, V. */
  wobbleV: number;
};

const share = 1 / 4;
export const shareOfWeak = 1 / 32;
const mostOfSwing = 1 / 2;
const weak = 0.5;

export function createLevels(): Levels {
  // Numbers begin as fractions: a field that was ever a whole number changes its layout later.
  const levels = { lowV: NaN, highV: NaN, wobbleV: NaN };
  levels.wobbleV = 0;
  return levels;
}

/**
 * A level after one more tooth.
 * @param value the tooth's peak or trough, V. @param toothV its peak to peak, V; NaN where that was not seen.
 * @param strongAt from this share of the swing on it counts in full; more than a half. @param weakGain what half of the swing
 *   and less moves it by, share of what it differs.
 */
export function followed(
  level: number,
  value: number,
  swingV: number,
  toothV: number,
  strongAt: number,
  weakGain: number,
): number {
  if (Number.isNaN(level)) return value;
  if (Number.isNaN(swingV)) return level + share * (value - level);
  const most = mostOfSwing * swingV;
  const strength = (toothV / swingV - weak) / (strongAt - weak);
  const gain = strength < 1 ? weakGain + (share - weakGain) * Math.max(0, strength) : share;
  return level + gain * Math.min(most, Math.max(-most, value - level));
}

/**
 * Thresholds of a fitted band: the fractions of the eye (the lowest peak against the highest trough of the last turn),
 * widened about their centre by noise, to half the eye at most. Noise is the larger of two: ten sigmas of its white part,
 * and one and a half times what the signal came back by on its flanks lately, which sees hum, bumps and bounce too, of
 * whatever colour. Ten sigmas keep a shaft that stops in the very middle of the band five sigmas away from either point
 * (Rice 1944: noise of the bandwidth f0 crosses there 3.7e-6 f0 times a second). Teeth too weak for the noise do not
 * narrow the eye: it then reaches towards the usual levels.
 * @param noiseV rms of the filtered signal's white noise; NaN: not known. @param fitted written.
 */
export function fitThresholds(
  levels: Levels,
  eye: { readonly lowV: number; readonly highV: number },
  fractions: Extract<Band, { mode: 'fitted' }>,
  noiseV: number,
  fitted: BandLevels,
): void {
  const { operateFraction, releaseFraction } = fractions;
  const sigmaV = Number.isNaN(noiseV) ? 0 : noiseV;
  let { lowV, highV } = eye;
  const lackV = leastSigmas * sigmaV - (highV - lowV);
  if (lackV > 0) {
    const aboveV = Math.max(0, levels.highV - highV);
    const belowV = Math.max(0, lowV - levels.lowV);
    const share = Math.min(1, lackV / (aboveV + belowV));
    if (share > 0) {
      highV += share * aboveV;
      lowV -= share * belowV;
    }
  }
  const eyeV = highV - lowV;
  const noisy = Math.max(10 * sigmaV, 1.5 * levels.wobbleV);
  const wanted = Math.max((operateFraction - releaseFraction) * eyeV, Math.min(noisy, eyeV / 2));
  const centreV = lowV + ((operateFraction + releaseFraction) / 2) * eyeV;
  fitted.operateV = Math.min(centreV + wanted / 2, lowV + Math.max(0.95, operateFraction) * eyeV);
  fitted.releaseV = Math.max(centreV - wanted / 2, lowV + Math.min(0.05, releaseFraction) * eyeV);
}
