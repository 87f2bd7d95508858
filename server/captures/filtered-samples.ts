/** `signal=filtered`: what the band sees. The filter runs from the capture's first sample, as it did when it was kept. */
import type { CaptureRecord, CaptureStore } from '@/db';
import { planColumns } from '@/db/capture-store/columns';
import type { Samples } from '@/server/contract';
import { createFilteredView } from '@/signal/filtered';
import { voltsOrNull } from './samples';
import type { SamplesWish } from './samples';
import { captureStretches } from './stretches';
import { createTurns } from './turns';

/** The kept settings must have passed `validateSetup` at the capture's rate. */
export async function filteredSamples(
  store: CaptureStore,
  capture: CaptureRecord,
  { channel, fromS, toS, points }: SamplesWish,
): Promise<Samples> {
  const { rateHz, lengthSamples, settings, rig } = capture;
  const setup = rig.channels.find(({ name }) => name === channel);
  if (setup === undefined) throw new Error(`capture ${capture.id} has no setup of channel ${channel}`);
  const from = Math.min(lengthSamples, Math.max(0, Math.round(fromS * rateHz)));
  const to = Math.min(lengthSamples, Math.max(from, Math.round(toS * rateHz)));
  const whole = to - from <= points;
  const plan = whole
    ? { fromIndex: from, stepSamples: 1, columns: to - from }
    : planColumns(from, to, points);
  const end = Math.min(lengthSamples, plan.fromIndex + plan.columns * plan.stepSamples);
  const min = new Float64Array(plan.columns).fill(NaN);
  const max = new Float64Array(plan.columns).fill(NaN);

  const view = createFilteredView(setup, settings.filter, rateHz);
  let volts = new Float64Array(0);
  const turn = createTurns();
  for await (const stretch of captureStretches(store, capture, [channel], end)) {
    if (stretch.kind === 'gap') {
      view.gap();
      continue;
    }
    const { startIndex, count, arrays } = stretch;
    const [samples] = arrays;
    if (samples === undefined) continue;
    if (volts.length < count) volts = new Float64Array(count);
    view.run(samples, count, volts, 0);
    for (let i = Math.max(0, plan.fromIndex - startIndex); i < count; i++) {
      const column = Math.floor((startIndex + i - plan.fromIndex) / plan.stepSamples);
      const v = volts[i]!;
      // Written so that NaN, the empty column, gives way.
      if (!(min[column]! <= v)) min[column] = v;
      if (!(max[column]! >= v)) max[column] = v;
    }
    await turn();
  }
  const place = { channel, rateHz, fromS: plan.fromIndex / rateHz, stepS: plan.stepSamples / rateHz };
  return whole
    ? { ...place, kind: 'raw', v: voltsOrNull(min) }
    : { ...place, kind: 'minmax', min: voltsOrNull(min), max: voltsOrNull(max) };
}
