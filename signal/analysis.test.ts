import { describe, expect, it } from 'vitest';
import { analyse, createAnalyser } from '@/signal/analysis';
import { defaultSettings } from '@/signal/model';
import type { Filter } from '@/signal/model';
import { normal, sampled, seeded, testRig } from '@/signal/test-signals';

const rateHz = 10_000;
const options = { rig: testRig('quadrature', 20), settings: defaultSettings, rateHz, channels: ['A', 'B'] };
const lowpass: Filter = { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 800 };
const volts = (n: number, from = 0): Float64Array[] =>
  [0, 0.25].map((shift) =>
    sampled(n, rateHz, (t) => 1.65 + Math.sin(2 * Math.PI * (200 * (t + from) - shift))),
  );

describe('analysis of a capture', () => {
  it('gives the shape of the API, with times from the first sample', () => {
    const made = analyse(options, [
      { arrays: volts(10_000) },
      { lostSamples: 500, estimated: true },
      { arrays: volts(10_000, 1.05) },
    ]);
    if (!made.ok) throw new Error(made.issue.detail);
    const analysis = made.value;
    expect(Object.keys(analysis.channels)).toEqual(['A', 'B']);
    expect(analysis.gaps).toEqual([{ from: 1, to: 1.05, lostSamples: 500, estimated: true }]);
    expect(analysis.direction.map(({ value }) => value)).toEqual([
      'unknown',
      'forward',
      'unknown',
      'forward',
    ]);
    expect(analysis.direction[0]!.from).toBe(0);
    expect(analysis.direction.at(-1)!.to).toBeCloseTo(2.05, 12);
    for (const [k, stretch] of analysis.direction.entries())
      if (k > 0) expect(stretch.from).toBe(analysis.direction[k - 1]!.to);
    expect(analysis.speed.filter(({ rpm }) => rpm === null).map(({ t }) => t)).toEqual([0, 1]);
    expect(analysis.pulses).toBeGreaterThan(397);
    expect(analysis.pulses).toBeLessThanOrEqual(400);
    expect(analysis.findings).toMatchObject([{ code: 'lost-samples', from: 1, to: 2.05 }]);
    expect(analysis.margin!.volts).toBeGreaterThan(0.7);
    const edges = analysis.channels.A!.edges;
    expect(edges[0]).toEqual({
      t: expect.any(Number),
      midT: expect.any(Number),
      rising: expect.any(Boolean),
    });
    for (const { t, midT } of edges) expect(midT).toBeLessThanOrEqual(t);
    expect(JSON.parse(JSON.stringify(analysis))).toEqual(analysis);
  });

  it('does not depend on how the capture was pushed', () => {
    const whole = analyse(options, [{ arrays: volts(150_000) }]);
    const made = createAnalyser(options);
    if (!made.ok) throw new Error(made.issue.detail);
    const arrays = volts(150_000);
    for (let at = 0; at < 150_000; at += 777) {
      const part = arrays.map((array) => array.subarray(at, at + 777));
      made.value.push(part, part[0]!.length);
    }
    expect({ ok: true, value: made.value.finish() }).toEqual(whole);
  });

  it.each([
    { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 800 },
    { kind: 'highpass', family: 'butterworth', order: 2, cutoffHz: 1 },
    { kind: 'notch', family: 'butterworth', order: 2, lowHz: 48, highHz: 52 },
  ] as const)('nor where it is filtered both ways, bit for bit: $kind', (filter) => {
    const noise = normal(seeded(4));
    const codes = volts(150_000).map((array) =>
      Int16Array.from(array, (v) => Math.round(1000 * (v + 0.05 * noise()))),
    );
    const pushedBy = (size: number) => {
      const made = createAnalyser({ ...options, settings: { ...defaultSettings, filter }, zeroPhase: true });
      if (!made.ok) throw new Error(made.issue.detail);
      const push = (from: number, end: number): void => {
        for (let at = from; at < end; at += size) {
          const part = codes.map((array) => array.subarray(at, Math.min(at + size, end)));
          made.value.push(part, part[0]!.length);
        }
      };
      push(0, 100_000);
      made.value.gap(1234, false);
      push(100_000, 150_000);
      return made.value.finish();
    };
    const whole = pushedBy(150_000);
    expect(whole.gaps).toMatchObject([{ from: 10, lostSamples: 1234 }]);
    expect(whole.pulses).toBeGreaterThan(2900);
    for (const size of [777, 4096, 70_001]) expect(pushedBy(size)).toEqual(whole);
  });

  it('takes no gap of less than half a sample, nor one of no number', () => {
    const zeroPhase = { ...options, settings: { ...defaultSettings, filter: lowpass }, zeroPhase: true };
    for (const own of [options, zeroPhase]) {
      const whole = analyse(own, [{ arrays: volts(20_000) }]);
      const chunks = [0.4, NaN, -3, Infinity].map((lostSamples) => ({ lostSamples, estimated: false }));
      const arrays = volts(20_000);
      const parts = [0, 7000].map((at) => ({
        arrays: arrays.map((one) => one.subarray(at, at === 0 ? 7000 : 20_000)),
      }));
      expect(analyse(own, [parts[0]!, ...chunks, parts[1]!])).toEqual(whole);
    }
  });

  it('hands on what is wrong with the settings', () => {
    const made = createAnalyser({ ...options, settings: { ...defaultSettings, holdoffS: NaN } });
    expect(made).toMatchObject({ ok: false, issue: { code: 'bad-holdoff', pointer: '/holdoffS' } });
  });
});
