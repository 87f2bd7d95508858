import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { RecentSignal } from '@/server/hub/recent-signal';

/** The same columns from a plain map of every sample that the ring must still hold. */
function expected(samples: Map<number, number>, firstIndex: number, group: number, count: number) {
  const min: (number | null)[] = [];
  const max: (number | null)[] = [];
  for (let column = 0; column < count; column += 1) {
    const inside: number[] = [];
    for (let i = 0; i < group; i += 1) {
      const value = samples.get(firstIndex + column * group + i);
      if (value !== undefined) inside.push(value);
    }
    min.push(inside.length === 0 ? null : Math.min(...inside));
    max.push(inside.length === 0 ? null : Math.max(...inside));
  }
  return { min, max };
}

describe('the newest samples of a channel', () => {
  it('gives the columns of the samples that it still holds, across gaps and wraps', () => {
    const run = fc.record({
      gap: fc.integer({ min: 0, max: 5 }),
      values: fc.array(fc.integer({ min: -2048, max: 2047 }), { minLength: 1, maxLength: 40 }),
    });
    fc.assert(
      fc.property(
        fc.array(run, { minLength: 1, maxLength: 12 }),
        fc.integer({ min: 1, max: 9 }),
        fc.integer({ min: 0, max: 200 }),
        (runs, group, firstIndex) => {
          const capacity = 64;
          const signal = new RecentSignal(capacity, { voltsPerCode: 1, codeOffset: 0 });
          const order: [number, number][] = [];
          let index = 0;
          for (const { gap, values } of runs) {
            index += gap;
            signal.append(index, Int16Array.from(values));
            values.forEach((value, i) => order.push([index + i, value]));
            index += values.length;
          }
          const oldest = signal.oldestIndex as number;
          const held = new Map(order.filter(([at]) => at >= oldest));
          expect(held.size).toBeGreaterThanOrEqual(Math.min(capacity, order.length));
          expect(held.size).toBeLessThanOrEqual(2 * capacity);
          expect(signal.columns(firstIndex, group, 30)).toEqual(expected(held, firstIndex, group, 30));
          const read = signal.read(firstIndex, firstIndex + 100);
          const values = read.flatMap(({ startIndex, samples }) =>
            Array.from(samples, (value, i): [number, number] => [startIndex + i, value]),
          );
          expect(values).toEqual([...held].filter(([at]) => at >= firstIndex && at < firstIndex + 100));
        },
      ),
      { numRuns: 500 },
    );
  });

  it('turns codes into volts by the channel’s setup, also where the scale is negative', () => {
    const signal = new RecentSignal(16, { voltsPerCode: -0.5, codeOffset: 10 });
    signal.append(0, Int16Array.from([10, 12, 6]));
    expect(signal.columns(0, 3, 1)).toEqual({ min: [-1], max: [2] });
  });

  it('leaves volts as they are', () => {
    const signal = new RecentSignal(16, { voltsPerCode: 7, codeOffset: 3 });
    signal.append(5, Float64Array.from([1.25]));
    expect(signal.columns(4, 1, 3)).toEqual({ min: [null, 1.25, null], max: [null, 1.25, null] });
  });
});
