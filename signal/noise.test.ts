/** What is taken for noise of the raw signal, and what is the signal's own doing. */
import { describe, expect, it } from 'vitest';
import { burstLength, createNoiseMeter, endBurst, mostNoiseV, rawNoiseV } from '@/signal/noise';
import { normal, seeded } from '@/signal/test-signals';

/** Bursts that begin at every multiple of `every` samples. */
function noiseOf(volts: (sample: number) => number, every = 512): number {
  const meter = createNoiseMeter();
  for (let k = 0; k < 60; k++) {
    for (let i = 0; i < burstLength; i++) meter.burst[i] = volts(every * k + i);
    endBurst(meter);
  }
  return rawNoiseV(meter);
}

const sigmaV = 0.01;

describe('the noise of a signal', () => {
  it('is found beside a sine of ten samples a period or more', () => {
    for (const samples of [10, 37, 500]) {
      const noise = normal(seeded(1));
      const volts = (i: number) => 2.5 + 2 * Math.sin((2 * Math.PI * i) / samples) + sigmaV * noise();
      expect(noiseOf(volts)).toBeGreaterThan(0.85 * sigmaV);
      expect(noiseOf(volts)).toBeLessThan(1.25 * sigmaV);
    }
  });

  it('is not the steps of a switch, however close they are', () => {
    for (const samples of [14, 21, 60]) {
      const noise = normal(seeded(2));
      const volts = (i: number) => (i % samples < samples / 2 ? 0.2 : 3.2) + sigmaV * noise();
      expect(noiseOf(volts)).toBeGreaterThan(0.75 * sigmaV);
      expect(noiseOf(volts)).toBeLessThan(1.4 * sigmaV);
    }
  });

  it('is found where a rail cuts half of it off, but a pulse that stands between two rails is not', () => {
    const noise = normal(seeded(3));
    const cut = (v: number) => Math.min(5, Math.max(0, v + 0.1 * noise()));
    expect(noiseOf(() => cut(0))).toBeGreaterThan(0.08);
    expect(noiseOf(() => cut(0))).toBeLessThan(0.12);
    // Nearly in step with the bursts, as a wheel may be for a while: an edge lies in each of them.
    const pulse = (i: number) => cut((i / 64.2) % 1 < 0.2 ? 5 : 0);
    expect(noiseOf(pulse, 64)).toBeLessThan(0.15);
  });
});

describe('the most that the noise may be', () => {
  it('is not below the truth by much however few bursts there are, and never far above the estimate of many', () => {
    for (const quantumV of [0, 0.2 * sigmaV, sigmaV, 2 * sigmaV]) {
      const noise = normal(seeded(4));
      let closest = Infinity;
      for (let k = 0; k < 500; k++) {
        const meter = createNoiseMeter();
        meter.quantumV = quantumV;
        meter.quantumFixed = quantumV > 0;
        // A level anywhere between two codes.
        const levelV = ((k % 20) / 20) * quantumV;
        for (let n = 1; n <= 41; n++) {
          for (let i = 0; i < burstLength; i++) {
            const v = levelV + sigmaV * noise();
            meter.burst[i] = quantumV > 0 ? quantumV * Math.round(v / quantumV) : v;
          }
          endBurst(meter);
          if (n >= 4) closest = Math.min(closest, mostNoiseV(meter));
        }
        expect(mostNoiseV(meter)).toBeLessThan(1.15 * rawNoiseV(meter));
      }
      // Twelve times that is what a swing has to be: nine sigmas at the least.
      expect(closest).toBeGreaterThan(0.7 * sigmaV);
    }
  });

  it('is not taken down by a few low estimates, and follows noise that has gone', () => {
    const noise = normal(seeded(6));
    const meter = createNoiseMeter();
    const feed = (bursts: number, rmsV: number) => {
      for (let n = 0; n < bursts; n++) {
        for (let i = 0; i < burstLength; i++) meter.burst[i] = rmsV * noise();
        endBurst(meter);
      }
    };
    feed(400, sigmaV);
    feed(41, 0.8 * sigmaV);
    expect(mostNoiseV(meter)).toBeGreaterThan(sigmaV);
    feed(41, 0.1 * sigmaV);
    expect(mostNoiseV(meter)).toBeLessThan(0.2 * sigmaV);
  });
});
