/**
 * Teeth in step with the sample grid: what is left of the straight line's error between two samples is nearly the same
 * for each, so that teeth and turns hardly disagree and the speed is still off. What is said of its error has to hold it.
 */
import { describe, expect, it } from 'vitest';
import { defaultSettings } from '@/signal/model';
import type { SpeedMethod } from '@/signal/model';
import { createPipeline } from '@/signal/pipeline';
import { normal, sampled, seeded, testRig } from '@/signal/test-signals';

const rateHz = 10_000;
const teeth = 60;
const seconds = 20;
const settledS = 5;

/** Of a steady shaft: share of speeds within two of their error of the true one, and the mean error said, share of the speed. */
function honestyOf(method: SpeedMethod, samplesPerTooth: number, noiseV: number) {
  const toothHz = (rateHz / samplesPerTooth) * 1.0007;
  const trueRpm = (60 * toothHz) / teeth;
  const noise = normal(seeded(77));
  const volts = sampled(
    seconds * rateHz,
    rateHz,
    (t) => 1.65 + Math.sin(2 * Math.PI * toothHz * t + 0.3) + noiseV * noise(),
  );
  const settings = { ...defaultSettings, speed: { method, windowS: 0.02, stoppedAfterS: 2 } };
  const made = createPipeline({
    rig: testRig('single', teeth),
    settings,
    rateHz,
    channels: ['A'],
    startIndex: 0,
  });
  if (!made.ok) throw new Error(made.issue.detail);
  let count = 0;
  let within = 0;
  let said = 0;
  for (let from = 0; from < volts.length; from += 1000) {
    made.value.process([volts.subarray(from, from + 1000)], 1000);
    const { speed } = made.value.output;
    for (let i = 0; i < speed.count; i++) {
      if (speed.t[i]! < settledS) continue;
      count++;
      said += speed.errorRpm[i]! / trueRpm;
      if (Math.abs(speed.rpm[i]! - trueRpm) <= 2 * speed.errorRpm[i]!) within++;
    }
    made.value.drain();
  }
  expect(count).toBeGreaterThan(10_000);
  return { within: within / count, said: said / count };
}

describe.each([6, 6.05, 7.04, 7.92, 8, 10, 12])('%s samples a tooth', (samplesPerTooth) => {
  it.each([
    ['tooth', 3e-3],
    ['turn', 4e-5],
    ['window', 2e-4],
  ] as const)('the error of a speed per %s holds it, and is not wide', (method, mostSaid) => {
    for (const noiseV of [0.0005, 0.002, 0.01]) {
      const { within, said } = honestyOf(method, samplesPerTooth, noiseV);
      expect(within, `noise ${noiseV} V`).toBeGreaterThanOrEqual(0.95);
      expect(said, `noise ${noiseV} V`).toBeLessThan(mostSaid);
    }
  });
});
