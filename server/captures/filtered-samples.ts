/** `signal=filtered`: what the band sees. The filter runs from the capture's first sample, as it did when it was kept. */
import type { CaptureRecord, CaptureStore } from '@/db';
import type { Samples } from '@/server/contract';
import { createFilteredView } from '@/signal/filtered';
import { ColumnFiller } from './column-filler';
import type { SamplesWish } from './samples';
import { captureStretches } from './stretches';
import { createTurns } from './turns';

/** The kept settings must have passed `validateSetup` at the capture's rate. */
export async function filteredSamples(
  store: CaptureStore,
  capture: CaptureRecord,
  wish: SamplesWish,
): Promise<Samples> {
  const { rateHz, settings } = capture;
  const columns = new ColumnFiller(capture, wish);
  const view = createFilteredView(columns.setup, settings.filter, rateHz);
  let volts = new Float64Array(0);
  const turn = createTurns();
  for await (const stretch of captureStretches(store, capture, [wish.channel], columns.end)) {
    if (stretch.kind === 'gap') {
      view.gap();
      continue;
    }
    const { startIndex, count, arrays } = stretch;
    const [samples] = arrays;
    if (samples === undefined) continue;
    if (volts.length < count) volts = new Float64Array(count);
    view.run(samples, count, volts, 0);
    columns.take(volts, count, startIndex);
    await turn();
  }
  return columns.finish();
}
