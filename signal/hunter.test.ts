import { describe, expect, it } from 'vitest';
import { normal, sampled, seeded, testPipeline, testRig } from '@/signal/test-signals';

describe('finding the levels of a signal of which nothing is known', () => {
  it.each([20, 100, 400])(
    'takes a digital signal without any noise, %i Hz, from its first whole teeth on',
    (hz) => {
      const rateHz = 10_000;
      for (const filter of [
        { kind: 'none' as const },
        { kind: 'lowpass' as const, family: 'butterworth' as const, order: 4 as const, cutoffHz: 1500 },
      ]) {
        const pipeline = testPipeline(testRig('single', 8), rateHz, { filter });
        const volts = sampled(rateHz, rateHz, (t) => ((t * hz) % 1 < 0.5 ? 3 : 0.2));
        pipeline.process([volts], volts.length);
        const { state, pulses, channels } = pipeline.status();
        expect(state).toBe('running');
        expect(pulses).toBeGreaterThanOrEqual(hz - 1);
        expect(pulses).toBeLessThanOrEqual(hz);
        expect(channels[0]!.operateV).toBeGreaterThan(1.7);
        expect(channels[0]!.operateV).toBeLessThan(2.2);
      }
    },
  );

  it('puts the first band about the middle, wherever on a flank the signal was when the levels were found', () => {
    const rateHz = 10_000;
    for (let k = 0; k < 40; k++) {
      const noise = normal(seeded(k));
      const pipeline = testPipeline(testRig('single', 12), rateHz);
      const wave = (t: number) => 1.65 + Math.sin(2 * Math.PI * (k / 40 + 53 * t)) + 0.07 * noise();
      pipeline.process([sampled(2000, rateHz, wave)], 2000);
      const { operateV, releaseV } = pipeline.output.bands[0]!;
      expect(Math.abs((operateV + releaseV) / 2 - 1.65), `phase ${k} of 40`).toBeLessThan(0.15);
    }
  });

  it('makes nothing of a constant', () => {
    const pipeline = testPipeline(testRig('single', 8), 1000);
    const volts = sampled(5000, 1000, () => 3);
    pipeline.process([volts], volts.length);
    expect(pipeline.status()).toMatchObject({ state: 'stopped', pulses: 0 });
  });
});
