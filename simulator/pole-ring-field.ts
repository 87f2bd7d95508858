/**
 * Field above a strip or ring of alternating poles, magnetised square and perpendicular to the face (thickness t,
 * period lambda = one north-south pair). Amplitude of the k-th odd harmonic at gap z:
 * (2 Br / (pi k)) (1 - exp(-2 pi k t / lambda)) exp(-2 pi k z / lambda). Source: the solution of Laplace's equation for
 * a periodic magnetised strip, textbook magnetostatics; curvature is neglected (lambda much smaller than the ring).
 */

export type PoleRing = { pairLengthMm: number; thicknessMm: number; remanenceT: number };

/** Amplitude of one odd harmonic, mT. */
export function poleHarmonicMt(ring: PoleRing, harmonic: number, gapMm: number): number {
  const k = (2 * Math.PI * harmonic) / ring.pairLengthMm;
  const surface = ((2 * ring.remanenceT) / (Math.PI * harmonic)) * (1 - Math.exp(-k * ring.thicknessMm));
  return 1000 * surface * Math.exp(-k * gapMm);
}

/** Share of a field of period `pairLengthMm` that is left at `gapMm`: exp(-2 pi z / lambda). */
export function gapDecay(pairLengthMm: number, gapMm: number): number {
  return Math.exp((-2 * Math.PI * gapMm) / pairLengthMm);
}

/**
 * Returns the field in mT at `phase` (turns of the pole pair, rising through 0 at phase 0) and gap, with the first,
 * third and fifth harmonic.
 */
export function createPoleField(ring: PoleRing): (phase: number, gapMm: number) => number {
  const b1 = poleHarmonicMt(ring, 1, 0);
  const b3 = poleHarmonicMt(ring, 3, 0);
  const b5 = poleHarmonicMt(ring, 5, 0);
  let gapBefore = NaN;
  let d = NaN;
  return (phase, gapMm) => {
    // The gap seldom changes from one sample to the next.
    if (gapMm !== gapBefore) {
      gapBefore = gapMm;
      d = gapDecay(ring.pairLengthMm, gapMm);
    }
    const s = Math.sin(2 * Math.PI * phase);
    const s2 = s * s;
    const d2 = d * d;
    const third = b3 * d2 * (3 - 4 * s2);
    const fifth = b5 * d2 * d2 * (5 - 20 * s2 + 16 * s2 * s2);
    return s * d * (b1 + third + fifth);
  };
}
