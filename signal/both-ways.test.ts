import { describe, expect, it } from 'vitest';
import { analyse, createAnalyser } from '@/signal/analysis';
import { BothWays } from '@/signal/both-ways';
import { designFilters } from '@/signal/filter-design';
import type { Filter, Settings } from '@/signal/model';
import { defaultSettings } from '@/signal/model';
import { farthest, valueOf } from '@/signal/statistics/test-values';
import { filterZeroPhase, memorySamples } from '@/signal/statistics/zero-phase';
import { normal, sampled, seeded, testRig } from '@/signal/test-signals';

const rateHz = 20_000;
const filters: Filter[] = [
  { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 800 },
  { kind: 'lowpass', family: 'bessel', order: 2, cutoffHz: 100 },
  { kind: 'highpass', family: 'butterworth', order: 4, cutoffHz: 5 },
  { kind: 'notch', family: 'butterworth', order: 2, lowHz: 48, highHz: 52 },
];

function inPieces(filter: Filter, volts: Float64Array, random: () => number): Float64Array {
  const sections = designFilters(filter, rateHz);
  const ways = new BothWays(sections, valueOf(memorySamples(sections)));
  const out: number[] = [];
  for (let from = 0; from < volts.length;) {
    const to = Math.min(volts.length, from + 1 + Math.floor(random() * 20_000));
    for (const v of ways.push(volts.subarray(from, to))) out.push(v);
    from = to;
  }
  for (const v of ways.end()) out.push(v);
  return Float64Array.from(out);
}

const bytesOf = (volts: Float64Array): Buffer =>
  Buffer.from(volts.buffer, volts.byteOffset, volts.byteLength);

describe('forward-backward filtering in pieces', () => {
  it.each(filters)('gives what one call gives of the whole: %o', (filter) => {
    const random = seeded(3);
    const noise = normal(random);
    for (const length of [1, 2, 700, 5000, 300_000]) {
      const volts = sampled(length, rateHz, (t) => 2.5 + Math.sin(2 * Math.PI * 150 * t) + 0.1 * noise());
      const got = inPieces(filter, volts, random);
      const whole = filterZeroPhase(volts, designFilters(filter, rateHz));
      expect(got.length).toBe(length);
      expect(farthest(got, whole.ok ? whole.value : volts)).toBeLessThan(2e-7);
    }
  });

  it.each(filters)('gives the same bit for bit, however it is pushed: %o', (filter) => {
    const random = seeded(5);
    const noise = normal(random);
    for (const length of [3, 5000, 65_536, 65_537, 200_000]) {
      const volts = sampled(length, rateHz, (t) => 2.5 + Math.sin(2 * Math.PI * 150 * t) + 0.1 * noise());
      const whole = inPieces(filter, volts, () => 1e9);
      expect(whole.length).toBe(length);
      for (const cut of [random, () => 0.0388])
        expect(bytesOf(inPieces(filter, volts, cut)).equals(bytesOf(whole))).toBe(true);
    }
  });

  it('leaves edges where they are on the raw axis, whatever the filter delays, and says no delay', () => {
    const settings: Settings = { ...defaultSettings, filter: filters[1]! };
    const options = { rig: testRig('single', 10), settings, rateHz, channels: ['A'] };
    const volts = sampled(200_000, rateHz, (t) => 1.65 + Math.sin(2 * Math.PI * (40 * t + 4 * t * t)));
    const codes = Int16Array.from(volts, (v) => Math.round(1000 * v));
    for (const arrays of [[volts], [codes]]) {
      const made = analyse({ ...options, zeroPhase: true }, [{ arrays }]);
      if (!made.ok) throw new Error(made.issue.detail);
      const { channels, delayS, turns } = made.value;
      expect(delayS).toBe(0);
      expect(turns).toBeCloseTo(79.9, 0);
      const rises = channels.A!.edges.filter(({ rising }) => rising).slice(5, -5);
      expect(rises.length).toBeGreaterThan(750);
      for (const { midT } of rises) {
        const place = 40 * midT + 4 * midT * midT;
        expect(Math.abs(place - Math.round(place))).toBeLessThan(2e-3);
      }
    }
  });

  it('does not reach across a gap, and refuses a filter that would hold the whole capture', () => {
    const options = {
      rig: testRig('single', 10),
      settings: { ...defaultSettings, filter: filters[0]! },
      rateHz,
    };
    const made = createAnalyser({ ...options, channels: ['A'], zeroPhase: true });
    if (!made.ok) throw new Error(made.issue.detail);
    const part = (offset: number) => [
      sampled(20_000, rateHz, (t) => offset + Math.sin(2 * Math.PI * 100 * t)),
    ];
    made.value.push(part(1.65), 20_000);
    made.value.gap(10_000, false);
    made.value.push(part(1.65), 20_000);
    const { gaps, channels } = made.value.finish();
    expect(gaps).toEqual([{ from: 1, to: 1.5, lostSamples: 10_000, estimated: false }]);
    expect(channels.A!.edges.some(({ midT }) => midT > 0.999 && midT < 1.5)).toBe(false);
    const slow: Filter = { kind: 'highpass', family: 'butterworth', order: 8, cutoffHz: 0.02 };
    const refused = createAnalyser({
      ...options,
      settings: { ...defaultSettings, filter: slow },
      channels: ['A'],
      zeroPhase: true,
    });
    expect(refused).toMatchObject({ ok: false, issue: { code: 'bad-filter', pointer: '/filter' } });
  });
});
