/**
 * Pulses whose width carries the direction: each is held from its leading edge until its width is known, and then read.
 *
 * The class is the one with the least |ln(w / w_i)|, none beyond ln 1.25. A pulse that fills more than half of the time
 * since the pulse before may have been cut short by the next tooth, and one that a hold-off touched has no width of its own:
 * both tell no direction. With fewer than four samples in the narrowest class no width tells any.
 *
 * What is wider than every class by more than that is the sign of life that such sensors give at stand-still, again and
 * again: no tooth makes it, so that it is none. Counted, it would keep a shaft that stands turning for ever.
 */
import { createEdgeQueue } from '@/signal/columns';
import type { EdgeQueue } from '@/signal/columns';
import type { RigSetup, WidthClass } from '@/signal/model';
import { edgeLate, edgeRising } from '@/signal/pipeline-types';
import { neededRateHz } from '@/signal/statistics/width-code';

/** No tooth: the sign of life of a sensor at stand-still. */
export const standStill = 2;

/** The last digit of a ratio at the limit decides nothing. */
const mostOff = Math.log(1.25) * (1 + 1e-12);

export class WidthReader {
  /** Why no width tells a direction; null: they do. */
  readonly refusedBecause: { neededHz: number; rateHz: number } | null;
  /** The narrowest pulse is shorter than a sample: some fall between two, so that not even a speed can be told. */
  readonly isBlind: boolean;
  /** The leading edge that waits for its width, as an entry of a queue of its own. */
  readonly lead: EdgeQueue = createEdgeQueue();
  readonly leadRises: boolean;
  isHolding = false;
  /** Width of the last pulse, s. */
  widthS = NaN;
  /** Pulses by class, in the order of the rig's, and those that told no direction. */
  readonly counts: Float64Array;
  weak = 0;
  unmatched = 0;
  cutShort = 0;
  standStills = 0;
  private readonly classes: readonly WidthClass[];
  private readonly lnWidths: Float64Array;
  /** Wider than that, no tooth, s and samples. */
  private readonly widestS: number;
  private readonly longestHold: number;
  private lastLeadS = NaN;

  /** @param activeLow the pulse is the low state: its leading edge falls. */
  constructor(classes: readonly WidthClass[], activeLow: boolean, rateHz: number) {
    const needed = neededRateHz(classes);
    const widths = classes.map(({ widthS }) => widthS);
    this.classes = classes;
    this.refusedBecause =
      needed.ok && rateHz >= needed.value ? null : { neededHz: needed.ok ? needed.value : NaN, rateHz };
    this.isBlind = Math.min(...widths) * rateHz < 1;
    this.lnWidths = Float64Array.from(widths, Math.log);
    this.counts = new Float64Array(classes.length);
    this.leadRises = !activeLow;
    this.widestS = 1.25 * Math.max(...widths) + 1 / rateHz;
    this.longestHold = 2 * this.widestS * rateHz;
  }

  isLead(queue: EdgeQueue, i: number): boolean {
    return ((queue.flags[i]! & edgeRising) !== 0) === this.leadRises;
  }

  hold(queue: EdgeQueue, i: number): void {
    const { lead } = this;
    this.isHolding = true;
    lead.at[0] = queue.at[i]!;
    lead.midS[0] = queue.midS[i]!;
    lead.delayS[0] = queue.delayS[i]!;
    lead.sigmaS[0] = queue.sigmaS[i]!;
    lead.gridS[0] = queue.gridS[i]!;
    lead.rateHz = queue.rateHz;
    lead.extremeV[0] = queue.extremeV[i]!;
    lead.flags[0] = queue.flags[i]!;
  }

  /** Lost samples: the pulse at hand has no width, and the one before it no time. */
  forget(): void {
    this.isHolding = false;
    this.lastLeadS = NaN;
  }

  /** A pulse that began before `stopAt` may yet turn out to be a tooth at sample `at`. */
  mayHoldTooth(at: number, stopAt: number): boolean {
    const from = this.lead.at[0]!;
    return this.isHolding && from <= stopAt && at - from <= this.longestHold;
  }

  /**
   * The trailing edge, entry `i` of the queue, ends the pulse that is held.
   * @returns 1 forward, -1 reverse, 0 not told by this pulse, or `standStill`.
   */
  read(queue: EdgeQueue, i: number): number {
    const { lead } = this;
    this.isHolding = false;
    const leadS = lead.midS[0]!;
    // The filter delays both edges alike.
    const widthS = queue.midS[i]! - leadS;
    this.widthS = widthS;
    if (widthS > this.widestS) {
      this.standStills++;
      return standStill;
    }
    const periodS = leadS - this.lastLeadS;
    this.lastLeadS = leadS;
    if (this.refusedBecause) return 0;
    if (((lead.flags[0]! | queue.flags[i]!) & edgeLate) !== 0) {
      this.unmatched++;
      return 0;
    }
    if (Number.isNaN(periodS)) return 0;
    if (widthS > 0.5 * periodS) {
      this.cutShort++;
      return 0;
    }
    return this.classify(Math.log(widthS));
  }

  private classify(lnWidth: number): number {
    const { lnWidths, classes, counts } = this;
    let best = -1;
    let least = mostOff;
    for (let k = 0; k < lnWidths.length; k++) {
      const off = Math.abs(lnWidth - lnWidths[k]!);
      if (off > least) continue;
      least = off;
      best = k;
    }
    if (best < 0) {
      this.unmatched++;
      return 0;
    }
    counts[best] = counts[best]! + 1;
    const { means } = classes[best]!;
    if (means === 'weak') this.weak++;
    return means === 'forward' ? 1 : means === 'reverse' ? -1 : 0;
  }
}

/** Null where the rig is another arrangement. */
export function widthReader({ sensing, wheel, channels }: RigSetup, rateHz: number): WidthReader | null {
  if (sensing !== 'width-coded' || !wheel.widthClasses) return null;
  const activeLow = channels.find(({ role }) => role === 'A')?.sensor.activeLow ?? false;
  return new WidthReader(wheel.widthClasses, activeLow, rateHz);
}
