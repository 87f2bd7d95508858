/** Raw samples of all channels beside their forward-backward filtered volts, handed on together once both are there. */
import { BothWays } from '@/signal/both-ways';
import type { Section } from '@/signal/filter-design';
import type { Channel, SampleArray } from '@/signal/model';
import { toVolts } from '@/signal/scale';

/** A filter that remembers more samples than this is not run both ways: it would hold the capture in memory. */
export const longestMemorySamples = 4_000_000;

type Take = (arrays: readonly SampleArray[], count: number, filtered: readonly Float64Array[]) => void;

/**
 * What `take` is given: the samples as they came, how many of each array, and as many filtered volts a channel. It lags
 * behind what was pushed until `end`.
 */
export class BothWaysFeed {
  private readonly channels: readonly Channel[];
  private readonly ways: BothWays[];
  private readonly take: Take;
  private waiting: { arrays: readonly SampleArray[]; count: number }[] = [];

  constructor(channels: readonly Channel[], sections: readonly Section[], memorySamples: number, take: Take) {
    this.channels = channels;
    this.ways = channels.map(() => new BothWays(sections, memorySamples));
    this.take = take;
  }

  /** The first `count` samples of each array; they are copied. */
  push(arrays: readonly SampleArray[], count: number): void {
    this.waiting.push({ arrays: arrays.map((array) => array.slice(0, count)), count });
    this.hand(
      arrays.map((array, index) => {
        const volts = new Float64Array(count);
        toVolts(array, 0, count, this.channels[index]!, volts, 0);
        return this.ways[index]!.push(volts);
      }),
    );
  }

  /** The stretch is over (lost samples, or the end). */
  end(): void {
    this.hand(this.ways.map((way) => way.end()));
  }

  private hand(filtered: readonly Float64Array[]): void {
    let at = 0;
    const ready = filtered[0]!.length;
    while (at < ready) {
      const first = this.waiting[0]!;
      const count = Math.min(first.count, ready - at);
      this.take(
        first.arrays,
        count,
        filtered.map((volts) => volts.subarray(at, at + count)),
      );
      at += count;
      if (count === first.count) this.waiting.shift();
      else
        this.waiting[0] = {
          arrays: first.arrays.map((array) => array.subarray(count)),
          count: first.count - count,
        };
    }
  }
}
