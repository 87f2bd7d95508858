/** The stated standard error of an edge against what noise really does to it, and the margin against constructed teeth. */
import { describe, expect, it } from 'vitest';
import { openPaths } from '@/signal/test-paths';
import { normal, sampled, seeded, testPipeline, testRig } from '@/signal/test-signals';

const rateHz = 10_000;

/** Rms of what noise moves rising edges of a sine by, and the mean square root of what is stated, s. */
function errors(samplesPerTooth: number, snrDb: number, seed: number): { trueS: number; statedS: number } {
  const hz = rateHz / (samplesPerTooth * 1.0137);
  const sigmaV = Math.SQRT1_2 / 10 ** (snrDb / 20);
  const noise = normal(seeded(seed));
  const seconds = Math.min(60, 3000 / hz);
  const wave = (t: number) => 1.65 + Math.sin(2 * Math.PI * hz * t) + sigmaV * noise();
  const { log } = openPaths(testRig('single', 20), rateHz, seconds, [wave]).paths[0]!;
  const off: number[] = [];
  let square = 0;
  for (let n = Math.max(log.count - log.length, 40); n < log.count - 1; n++) {
    const t = log.riseS[n & log.mask]!;
    off.push(t - Math.round(t * hz) / hz);
    square += log.sigmaS[n & log.mask]! ** 2;
  }
  const mean = off.reduce((sum, x) => sum + x, 0) / off.length;
  const trueS = Math.sqrt(off.reduce((sum, x) => sum + (x - mean) ** 2, 0) / off.length);
  return { trueS, statedS: Math.sqrt(square / off.length) };
}

describe('the standard error of an edge', () => {
  it.each([
    [12, 20],
    [12, 40],
    [40, 20],
    [40, 45],
    [150, 20],
    [150, 30],
    [500, 20],
    [500, 40],
  ])('is what noise does to it, with %d samples a tooth at %d dB', (samplesPerTooth, snrDb) => {
    const { trueS, statedS } = errors(samplesPerTooth, snrDb, samplesPerTooth + snrDb);
    // From some hundred edges the true one itself is known to a few per cent.
    expect(statedS / trueS).toBeGreaterThan(0.8);
    // A flank that noise crosses several times is not known as well: there it may say up to twice too much.
    const isSlow = samplesPerTooth > 300 && snrDb < 30;
    expect(statedS / trueS).toBeLessThan(isSlow ? 2 : 1.35);
  });
});

describe('the margin', () => {
  const margin = (wave: (t: number) => number, seconds: number, pulses = 20) => {
    const pipeline = testPipeline(testRig('single', pulses), rateHz, {
      band: { mode: 'fixed', operateV: 1.9, releaseV: 1.4 },
    });
    pipeline.process([sampled(seconds * rateHz, rateHz, wave)], seconds * rateHz);
    return pipeline.status().margin;
  };
  const sine = (amplitude: (t: number) => number) => (t: number) =>
    1.65 + amplitude(t) * Math.sin(2 * Math.PI * 100 * t);

  it('is how far the worst tooth of the last turns stands beyond the band, in volts, sigmas and millitesla', () => {
    const noise = normal(seeded(1));
    const weak = (t: number) => (Math.floor(100 * t) % 20 === 5 ? 0.4 : 0.8);
    const found = margin((t) => sine(weak)(t) + 0.002 * noise(), 4)!;
    expect(found.volts).toBeCloseTo(0.15, 1);
    // 30 mV a millitesla.
    expect(found.millitesla).toBeCloseTo(found.volts / 0.03, 6);
    expect(found.sigmas! / (found.volts / 0.002)).toBeGreaterThan(0.8);
    expect(found.sigmas! / (found.volts / 0.002)).toBeLessThan(1.25);
  });

  it('is negative while a tooth is not counted, and recovers after the turns that it spans', () => {
    const missed = (t: number) => (Math.floor(100 * t) % 20 === 5 && t < 3 ? 0.2 : 0.8);
    expect(margin(sine(missed), 3)!.volts).toBeLessThan(0);
    expect(margin(sine(missed), 6)!.volts).toBeCloseTo(0.55, 1);
  });

  it('sees the release side as well', () => {
    const shallow = (t: number) => {
      const wave = Math.sin(2 * Math.PI * 100 * t);
      return 1.65 + (wave > 0 ? 1 : 0.35) * wave;
    };
    expect(margin(shallow, 3)!.volts).toBeCloseTo(0.1, 2);
  });
});
