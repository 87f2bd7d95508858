/**
 * Place on the wheel at any instant, from the instants of its teeth: linear between neighbouring teeth, and so right to
 * second order while the speed changes. Nothing is said outside the teeth given.
 */
import { got, notCount, notFinite, notInstants, notPositive, type Outcome } from '@/signal/statistics/issue';

export type PhasedSamples = {
  /** First sample that lies at or after the first tooth, and the one after the last that has a phase. */
  from: number;
  to: number;
  /** Phase of samples `from..to - 1`, rad: 2 pi a tooth, 0 at the first one. Rises all the way. */
  psiRad: Float64Array;
};

/**
 * Tooth phase of `samples` samples, the first at `startS`, `rateHz` a second.
 * @param teethS instants of one flank, s, on the axis of `startS`; two or more.
 * Issues: too-few, not-finite, not-ascending, bad-setting. No sample between the teeth: `from` = `to`.
 */
export function toothPhase(
  teethS: ArrayLike<number>,
  startS: number,
  rateHz: number,
  samples: number,
): Outcome<PhasedSamples> {
  const bad =
    notInstants(teethS, 2, 'tooth') ??
    notPositive(rateHz, 'sample rate') ??
    notFinite([startS], 'start') ??
    notCount(samples, 0, 'number of samples');
  if (bad) return bad;
  const indexOf = (t: number) => Math.min(samples, Math.max(0, Math.ceil((t - startS) * rateHz)));
  const from = indexOf(teethS[0]!);
  const to = Math.max(from, indexOf(teethS[teethS.length - 1]!));
  const psiRad = new Float64Array(to - from);
  let tooth = 0;
  for (let i = from; i < to; i++) {
    const t = startS + i / rateHz;
    while (tooth < teethS.length - 2 && t >= teethS[tooth + 1]!) tooth++;
    const share = (t - teethS[tooth]!) / (teethS[tooth + 1]! - teethS[tooth]!);
    psiRad[i - from] = 2 * Math.PI * (tooth + share);
  }
  return got({ from, to, psiRad });
}
