import { describe, expect, it } from 'vitest';
import { createFilteredView } from '@/signal/filtered';
import type { Filter } from '@/signal/model';
import { testChannel } from '@/signal/test-signals';

const filter: Filter = { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 100 };
const channel = testChannel('A', 'A', { voltsPerCode: 0.01, codeOffset: 100 });

describe('the filtered view', () => {
  it('begins at the level of the first sample and runs on over calls', () => {
    const codes = Int16Array.from({ length: 600 }, (_, i) => 350 + Math.round(100 * Math.sin(i / 9)));
    const whole = new Float64Array(600);
    createFilteredView(channel, filter, 1000).run(codes, 600, whole, 0);
    expect(whole[0]).toBeCloseTo(2.5, 9);
    const parts = new Float64Array(600);
    const view = createFilteredView(channel, filter, 1000);
    view.run(codes.subarray(0, 7), 7, parts, 0);
    view.run(codes.subarray(7), 593, parts, 7);
    expect(parts).toEqual(whole);
  });

  it('settles anew after a gap instead of ringing from what was before it', () => {
    const out = new Float64Array(4);
    const view = createFilteredView(channel, filter, 1000);
    view.run(new Int16Array(500).fill(1000), 4, out, 0);
    view.gap();
    view.run(Int16Array.of(200, 200, 200, 200), 4, out, 0);
    for (const volts of out) expect(volts).toBeCloseTo(1, 9);
  });

  it('passes volts through without a filter', () => {
    const out = new Float64Array(2);
    createFilteredView(channel, { kind: 'none' }, 1000).run(Float32Array.of(1.5, -2), 2, out, 0);
    expect([...out]).toEqual([1.5, -2]);
  });
});
