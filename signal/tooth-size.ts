/** How large a tooth has to be to be one, beside the usual ones and beside noise. */

/** A weak tooth stands at least so far out, share of the usual swing: teeth that differ by four to one, and a little more. */
const weakestShare = 0.21;
/** Where there are many, they stand so far out on average; less is hum or idle noise that goes on between the teeth. */
const weakOnAverage = 0.225;
/** What noise adds to the swing of a tooth, weak or strong: peak and trough are the outermost of many samples. */
const noiseOfSwing = 3.5;
/** Teeth weaker than this share of the usual swing must stand in the rhythm of the others. */
export const strongShare = 0.8;
/** A band that leaves less room than so many noise sigmas would count noise. */
export const leastSigmas = 12;
/** A swing below so many quanta may be one code toggling. */
export const leastQuanta = 4;

/**
 * The least that a tooth stands out by, V, where the usual ones stand out by `swingV`.
 * @param noiseV rms; NaN: not known.
 */
export function leastToothV(swingV: number, noiseV: number): number {
  return shareWithNoise(weakestShare, swingV, noiseV);
}

/** The least that many weak teeth stand out by on average, V. */
export function leastAverageV(swingV: number, noiseV: number): number {
  return shareWithNoise(weakOnAverage, swingV, noiseV);
}

function shareWithNoise(share: number, swingV: number, noiseV: number): number {
  return share * swingV + (noiseV > 0 ? (1 - share) * noiseOfSwing * noiseV : 0);
}
