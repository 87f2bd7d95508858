/**
 * Pulses whose width carries the direction or a warning: each is put into the class with the least |ln(w / w_i)|, and into
 * none where that exceeds ln 1.25. A pulse that fills more than half of its period may have been cut short by the next
 * tooth: it is in no class either. Speed comes from the leading edges alone and needs none of this.
 *
 * A width is only as good as its samples: four a pulse of the narrowest class at least, else the answer is refused.
 * Source: common practice of the trade (a doubling ladder of widths); the limits are ours.
 */
import type { WidthClass } from '@/signal/model';
import { got, notFinite, notPositive, refused, type Outcome } from '@/signal/statistics/issue';

/** In no class: its width fits none, or the period is too short to trust it. */
export const noClass = -1;
export const cutShort = -2;

const mostRatio = 1.25;
const samplesPerPulse = 4;

export type ClassifiedWidths = {
  /** Index into the classes, `noClass` or `cutShort`; one a pulse. */
  index: Int8Array;
  /** 1 forward, -1 reverse, 0 not told by this pulse; one a pulse. */
  direction: Int8Array;
  /** Pulses of each class, and of none. */
  counts: number[];
  unmatched: number;
  cutShort: number;
};

/** Lowest sample rate at which these classes can be told, Hz. Issues: bad-setting (as `classifyWidths`). */
export function neededRateHz(classes: readonly WidthClass[]): Outcome<number> {
  return badClasses(classes) ?? got(samplesPerPulse / Math.min(...classes.map(({ widthS }) => widthS)));
}

/**
 * Pulses of a record, classified: a reference for tests, against which the product's `width-reader.ts` is held pulse by pulse.
 * @param widthsS width of each pulse, s. @param periodsS from its leading edge to the next one's, s; infinite: not known.
 * @param rateHz samples a second of the signal that they were measured on; null: instants from the board's own timer.
 * Issues: bad-setting (no classes, classes that overlap, lengths differ), rate-too-low, not-finite (or not above 0).
 */
export function classifyWidths(
  widthsS: ArrayLike<number>,
  periodsS: ArrayLike<number>,
  classes: readonly WidthClass[],
  rateHz: number | null,
): Outcome<ClassifiedWidths> {
  const needed = neededRateHz(classes);
  if (!needed.ok) return needed;
  if (rateHz !== null) {
    const bad = notPositive(rateHz, 'sample rate');
    if (bad) return bad;
    if (rateHz < needed.value)
      return refused('rate-too-low', `${rateHz} samples a second, ${needed.value} needed to tell the widths`);
  }
  const n = widthsS.length;
  if (periodsS.length !== n) return refused('bad-setting', `${n} widths, ${periodsS.length} periods`);
  const bad = notFinite(widthsS, 'width');
  if (bad) return bad;
  const index = new Int8Array(n);
  const direction = new Int8Array(n);
  const counts = classes.map(() => 0);
  let unmatched = 0;
  let short = 0;
  for (let i = 0; i < n; i++) {
    const widthS = widthsS[i]!;
    const periodS = periodsS[i]!;
    if (!(widthS > 0) || !(periodS >= widthS))
      return refused('not-finite', `pulse ${i}: width ${widthS} s in a period of ${periodS} s`);
    if (widthS > 0.5 * periodS) {
      index[i] = cutShort;
      short++;
      continue;
    }
    const nearest = nearestClass(widthS, classes);
    index[i] = nearest;
    if (nearest === noClass) {
      unmatched++;
      continue;
    }
    counts[nearest] = counts[nearest]! + 1;
    const { means } = classes[nearest]!;
    direction[i] = means === 'forward' ? 1 : means === 'reverse' ? -1 : 0;
  }
  return got({ index, direction, counts, unmatched, cutShort: short });
}

function nearestClass(widthS: number, classes: readonly WidthClass[]): number {
  let best = noClass;
  // A width at the limit itself still belongs, whatever the last digit of its ratio.
  let least = Math.log(mostRatio) * (1 + 1e-12);
  classes.forEach((one, at) => {
    const off = Math.abs(Math.log(widthS / one.widthS));
    if (off <= least) {
      least = off;
      best = at;
    }
  });
  return best;
}

function badClasses(classes: readonly WidthClass[]) {
  if (classes.length === 0) return refused('bad-setting', 'no width classes');
  if (classes.length > 127) return refused('bad-setting', `${classes.length} width classes, 127 at most`);
  const widths = classes.map(({ widthS }) => widthS).sort((a, b) => a - b);
  for (let i = 0; i < widths.length; i++) {
    const bad = notPositive(widths[i]!, 'class width');
    if (bad) return bad;
    if (i > 0 && widths[i]! < mostRatio * widths[i - 1]!)
      return refused('bad-setting', `classes of ${widths[i - 1]} and ${widths[i]} s cannot be told apart`);
  }
  return null;
}
