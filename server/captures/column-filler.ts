/** Filtered volts of a stretch of a capture, gathered into columns as a picture wants them. */
import type { CaptureRecord } from '@/db';
import { planColumns } from '@/db/capture-store/columns';
import type { Samples } from '@/server/contract';
import type { Channel } from '@/signal/model';
import { voltsOrNull } from './samples';
import type { SamplesWish } from './samples';

export class ColumnFiller {
  readonly setup: Channel;
  /** Indices of the capture's samples that are drawn: `from` to before `end`. */
  readonly from: number;
  readonly end: number;
  private readonly whole: boolean;
  private readonly stepSamples: number;
  private readonly min: Float64Array;
  private readonly max: Float64Array;

  constructor(
    private readonly capture: CaptureRecord,
    private readonly wish: SamplesWish,
  ) {
    const { rateHz, lengthSamples, rig } = capture;
    const setup = rig.channels.find(({ name }) => name === wish.channel);
    if (setup === undefined) throw new Error(`capture ${capture.id} has no setup of channel ${wish.channel}`);
    this.setup = setup;
    const from = Math.min(lengthSamples, Math.max(0, Math.round(wish.fromS * rateHz)));
    const to = Math.min(lengthSamples, Math.max(from, Math.round(wish.toS * rateHz)));
    this.whole = to - from <= wish.points;
    const plan = this.whole
      ? { fromIndex: from, stepSamples: 1, columns: to - from }
      : planColumns(from, to, wish.points);
    this.from = plan.fromIndex;
    this.stepSamples = plan.stepSamples;
    this.end = Math.min(lengthSamples, plan.fromIndex + plan.columns * plan.stepSamples);
    this.min = new Float64Array(plan.columns).fill(NaN);
    this.max = new Float64Array(plan.columns).fill(NaN);
  }

  /** `volts[0]` is sample `startIndex` of the capture; what is not drawn is left out. */
  take(volts: Float64Array, count: number, startIndex: number): void {
    const { min, max, from, stepSamples } = this;
    const last = Math.min(count, this.end - startIndex);
    for (let i = Math.max(0, from - startIndex); i < last; i++) {
      const column = Math.floor((startIndex + i - from) / stepSamples);
      const v = volts[i]!;
      // Written so that NaN, the empty column, gives way.
      if (!(min[column]! <= v)) min[column] = v;
      if (!(max[column]! >= v)) max[column] = v;
    }
  }

  finish(): Samples {
    const { rateHz } = this.capture;
    const place = {
      channel: this.wish.channel,
      rateHz,
      fromS: this.from / rateHz,
      stepS: this.stepSamples / rateHz,
    };
    return this.whole
      ? { ...place, kind: 'raw', v: voltsOrNull(this.min) }
      : { ...place, kind: 'minmax', min: voltsOrNull(this.min), max: voltsOrNull(this.max) };
  }
}
