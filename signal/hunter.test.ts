import { describe, expect, it } from 'vitest';
import { sampled, testPipeline, testRig } from '@/signal/test-signals';

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

  it('makes nothing of a constant', () => {
    const pipeline = testPipeline(testRig('single', 8), 1000);
    const volts = sampled(5000, 1000, () => 3);
    pipeline.process([volts], volts.length);
    expect(pipeline.status()).toMatchObject({ state: 'stopped', pulses: 0 });
  });
});
