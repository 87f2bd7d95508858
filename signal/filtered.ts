/**
 * A channel's samples scaled and filtered, for drawing what the band sees (`signal=filtered`). Causal, on the filter's own
 * delay: nothing is shifted.
 */
import { createCascade, resetCascade, runCascade } from '@/signal/biquad';
import { designFilters } from '@/signal/filter-design';
import type { Channel, Filter, SampleArray } from '@/signal/model';
import { toVolts } from '@/signal/scale';

export interface FilteredView {
  /** Volts of `array[0..count)` after the filter, written to `out[at..)`; the filter runs on from the call before. */
  run(array: SampleArray, count: number, out: Float64Array, at: number): void;
  /** After a gap: the next sample primes the filter anew. */
  gap(): void;
}

/** The filter must have passed `validateSetup` at this rate. */
export function createFilteredView(
  channel: Channel,
  filter: Filter | Filter[],
  rateHz: number,
): FilteredView {
  const cascade = createCascade(designFilters(filter, rateHz));
  return {
    run(array, count, out, at) {
      toVolts(array, 0, count, channel, out, at);
      runCascade(cascade, out, at, at + count);
    },
    gap() {
      resetCascade(cascade);
    },
  };
}
