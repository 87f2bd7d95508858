/**
 * State levels of one channel as envelopes (peaks and troughs, so that narrow pulses count like any other), and the
 * fitted band that follows from them.
 *
 * Each accepted tooth moves its level by a quarter of what it differs, and by no more than an eighth of the swing: one
 * wild peak cannot lift the band over the teeth. Peaks that are not counted move nothing, so levels stay where they are
 * when the shaft stops.
 */
import type { Band, BandLevels } from '@/signal/model';

export type Levels = { lowV: number; highV: number };

const share = 1 / 4;
const mostOfSwing = 1 / 2;

/** NaN: not known yet. */
export function createLevels(): Levels {
  return { lowV: NaN, highV: NaN };
}

export function followPeak(levels: Levels, peakV: number): void {
  levels.highV = followed(levels.highV, peakV, levels.highV - levels.lowV);
}

export function followTrough(levels: Levels, troughV: number): void {
  levels.lowV = followed(levels.lowV, troughV, levels.highV - levels.lowV);
}

function followed(level: number, value: number, swingV: number): number {
  if (Number.isNaN(level)) return value;
  if (Number.isNaN(swingV)) return level + share * (value - level);
  const most = mostOfSwing * swingV;
  return level + share * Math.min(most, Math.max(-most, value - level));
}

/**
 * Thresholds of a fitted band: the fractions of the swing, widened about their centre to six noise sigmas (Rice 1944:
 * 1.5e-8 noise crossings per period of the noise bandwidth), to half the swing at most.
 * @param noiseV rms of the filtered signal's noise; NaN: not known, then not widened.
 */
export function fittedThresholds(
  levels: Levels,
  fractions: Extract<Band, { mode: 'fitted' }>,
  noiseV: number,
): BandLevels {
  const swingV = levels.highV - levels.lowV;
  const narrowest = (fractions.operateFraction - fractions.releaseFraction) * swingV;
  const wanted = Number.isNaN(noiseV) ? narrowest : Math.max(narrowest, Math.min(6 * noiseV, swingV / 2));
  const centreV = levels.lowV + ((fractions.operateFraction + fractions.releaseFraction) / 2) * swingV;
  return {
    operateV: Math.min(
      centreV + wanted / 2,
      levels.lowV + Math.max(0.95, fractions.operateFraction) * swingV,
    ),
    releaseV: Math.max(
      centreV - wanted / 2,
      levels.lowV + Math.min(0.05, fractions.releaseFraction) * swingV,
    ),
  };
}
