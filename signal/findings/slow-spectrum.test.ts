import { describe, expect, it } from 'vitest';
import type { ChannelPath } from '@/signal/channel-path';
import { besideTone, toneNear } from '@/signal/findings/hum-tone';
import type { RuleContext } from '@/signal/findings/rule';
import { SlowSpectra, sizeAt } from '@/signal/findings/slow-spectrum';
import { createSlowRing, keepSlow } from '@/signal/slow-ring';
import { normal, seeded, testChannel, testRig } from '@/signal/test-signals';
import { createToothLog } from '@/signal/tooth-log';

const rateHz = 2000;

/** Spectra of channels at rest that carry these volts, 3 s of them. */
function spectraOf(...volts: ((t: number) => number)[]): SlowSpectra {
  const paths = volts.map((v, index) => {
    const slow = createSlowRing(rateHz);
    const samples = Float64Array.from({ length: 3 * rateHz }, (_, i) => v(i / rateHz));
    keepSlow(slow, samples, 0, samples.length, 0);
    const channel = testChannel('AB'[index]!, index === 0 ? 'A' : 'B');
    return { channel, slow, log: createToothLog(8, 8), noiseV: NaN } as unknown as ChannelPath;
  });
  const context = { rig: testRig('quadrature', 8), rateHz, paths } as unknown as RuleContext;
  const spectra = new SlowSpectra(context);
  expect(spectra.look(3)).toBe(true);
  return spectra;
}

const tone =
  (hz: number, volts: number, phase = 0.4) =>
  (t: number) =>
    2 + volts * Math.cos(2 * Math.PI * hz * t + phase);

describe('spectra of the slow ring', () => {
  it('are the discrete Fourier transform of each of two channels behind a Hann window', () => {
    const noise = normal(seeded(5));
    const values = [0, 1].map(() => Float64Array.from({ length: 3 * rateHz }, () => noise()));
    const spectra = spectraOf(...values.map((v) => (t: number) => v[Math.round(t * rateHz)]!));
    const n = 1024;
    expect(spectra.binHz).toBeCloseTo(1000 / n, 12);
    values.forEach((v, c) => {
      const kept = Array.from({ length: n }, (_, i) => v[2 * (3000 - n + i)]!);
      for (const bin of [1, 2, 51, 200, 511]) {
        let re = 0;
        let im = 0;
        kept.forEach((x, i) => {
          const weight = ((0.5 - 0.5 * Math.cos((2 * Math.PI * i) / n)) * 4) / n;
          re += weight * x * Math.cos((2 * Math.PI * bin * i) / n);
          im -= weight * x * Math.sin((2 * Math.PI * bin * i) / n);
        });
        expect(spectra.list[c]!.re[bin]).toBeCloseTo(re, 10);
        expect(spectra.list[c]!.im[bin]).toBeCloseTo(im, 10);
      }
    });
  });

  it('of twice the time part two tones that the shorter ones cannot', () => {
    const spectra = spectraOf((t) => tone(50, 0.3)(t) + tone(51.2, 0.2)(t));
    const short = spectra.list[0]!;
    expect(toneNear(short, spectra.binHz, 51.2, 0.3)).toBeNull();
    const longer = spectra.longerOf(short)!;
    const { binHz } = longer.wheel;
    expect(binHz).toBeCloseTo(1000 / 2048, 12);
    for (const [hz, volts] of [
      [50, 0.3],
      [51.2, 0.2],
    ] as const) {
      const found = toneNear(longer, binHz, hz, 0.3)!;
      expect(Math.abs(found.hz - hz)).toBeLessThan(0.1);
      expect(Math.abs(found.amplitudeV / volts - 1)).toBeLessThan(0.15);
    }
    expect(spectra.longerOf(short)).toBe(longer);
  });

  it('of twice the time are not made before so much has come', () => {
    const spectra = spectraOf(tone(50, 0.3));
    const { context } = spectra as unknown as { context: RuleContext };
    context.paths[0]!.slow.unbrokenFrom = context.paths[0]!.slow.count - 2047;
    expect(spectra.longerOf(spectra.list[0]!)).toBeNull();
  });

  it('tell the frequency of a tone between two bins to a hundredth of a bin, and its amplitude', () => {
    for (const hz of [49.5, 49.8, 50, 50.17, 50.5]) {
      const { list, binHz } = spectraOf(tone(hz, 0.3), tone(60, 0.1));
      const found = toneNear(list[0]!, binHz, 50, 0.6)!;
      expect(Math.abs(found.hz - hz)).toBeLessThan(0.01);
      expect(found.amplitudeV).toBeCloseTo(0.3, 3);
      expect(toneNear(list[0]!, binHz, 60, 0.5)).toBeNull();
      expect(besideTone(list[0]!, found.bin, 3, 8)).toBeLessThan(0.024 * 0.3);
    }
  });

  it('place a tone by its clean side where a larger one stands beside it', () => {
    const both = (t: number): number => tone(59.5, 0.05)(t) + Math.cos(2 * Math.PI * 62.6 * t);
    const { list, binHz } = spectraOf(both);
    const found = toneNear(list[0]!, binHz, 59.5, 0.5)!;
    expect(Math.abs(found.hz - 59.5)).toBeLessThan(0.2);
  });

  it('are not made of a stream too slow to hold the mains', () => {
    const slow = createSlowRing(90);
    const path = {
      channel: testChannel('A', 'A'),
      slow,
      log: createToothLog(8, 8),
    } as unknown as ChannelPath;
    const context = { rig: testRig('single', 8), rateHz: 90, paths: [path] } as unknown as RuleContext;
    const spectra = new SlowSpectra(context);
    expect(spectra.list).toEqual([]);
    expect(spectra.look(1)).toBe(false);
  });

  it('leave the other channel alone', () => {
    const { list } = spectraOf(tone(50, 0.3), tone(120, 0.2));
    expect(sizeAt(list[0]!, 123)).toBeLessThan(1e-3);
    expect(sizeAt(list[1]!, 51)).toBeLessThan(1e-3);
  });
});
