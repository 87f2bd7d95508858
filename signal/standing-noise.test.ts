/** A shaft that stands: whatever its noise is, it makes no band, no edge and no speed until the shaft moves. */
import { describe, expect, it } from 'vitest';
import type { Filter } from '@/signal/model';
import { normal, sampled, seeded, testPipeline, testRig } from '@/signal/test-signals';

const restS = 10;
const supplyV = 3.3;

/** Noise so many dB below the swing to come, behind any of the filters, as codes or floats, of sensors of either kind. */
function drawn(seed: number) {
  const random = seeded(seed);
  const noise = normal(random);
  const oneOf = <T>(list: readonly T[]): T => list[Math.floor(random() * list.length)]!;
  const draw = (from: number, to: number) => from + (to - from) * random();
  const kind = oneOf(['linear', 'linear', 'switch'] as const);
  const rateHz = oneOf([250, 1000, 4000, 10_000]);
  const toothHz = rateHz / draw(20, 100);
  const swingV = kind === 'linear' ? draw(0.05, 1.8) : 2.6;
  const order = oneOf([2, 4, 8] as const);
  const lowHz = toothHz / draw(3, 8);
  const highHz = Math.min(0.45 * rateHz, toothHz * draw(2, 8));
  const filter = oneOf<Filter>([
    { kind: 'none' },
    { kind: 'lowpass', family: 'butterworth', order, cutoffHz: highHz },
    { kind: 'lowpass', family: 'bessel', order, cutoffHz: highHz },
    { kind: 'highpass', family: 'butterworth', order, cutoffHz: lowHz },
    { kind: 'bandpass', family: 'butterworth', order, lowHz, highHz },
    { kind: 'notch', family: 'butterworth', order, lowHz: 0.2 * toothHz, highHz: 0.22 * toothHz },
  ]);
  const noiseDb = draw(12, 60);
  const noiseV = swingV / Math.sqrt(8) / 10 ** (noiseDb / 20);
  const quantumV = random() < 0.2 ? 0 : supplyV / 2 ** oneOf([8, 10, 12, 14]);
  const asCodes = quantumV > 0 && random() < 0.7;
  const lowV = draw(0.4, 0.9);
  const place = draw(0, 1);
  const volts = sampled((restS + Math.max(2, 30 / toothHz)) * rateHz, rateHz, (t) => {
    const wave = Math.sin(2 * Math.PI * (place + toothHz * Math.max(0, t - restS)));
    const swung = kind === 'linear' ? wave : Math.sign(wave);
    const v = Math.min(supplyV, Math.max(0, lowV + swingV * (0.5 + 0.5 * swung) + noiseV * noise()));
    return quantumV > 0 ? quantumV * Math.round(v / quantumV) : v;
  });
  const rig = testRig('single', 12);
  const { sensor, ...channel } = rig.channels[0]!;
  const sensors =
    kind === 'linear' ? sensor : { ...sensor, kind, quiescentV: null, sensitivityMvPerMt: null };
  rig.channels = [{ ...channel, sensor: sensors, voltsPerCode: quantumV || channel.voltsPerCode }];
  return {
    samples: asCodes ? Int16Array.from(volts, (v) => Math.round(v / quantumV)) : volts,
    pipeline: testPipeline(rig, rateHz, { filter }),
    restSamples: restS * rateHz,
    noiseDb,
  };
}

describe('noise of a shaft that stands', () => {
  it.each([1, 2, 3, 4])(
    'makes no band, no edge and no speed, and its teeth are found once it turns, %i',
    (lot) => {
      for (let k = 0; k < 50; k++) {
        const seed = 1000 * lot + k;
        const { samples, pipeline, restSamples, noiseDb } = drawn(seed);
        const { output } = pipeline;
        pipeline.process([samples.subarray(0, restSamples)], restSamples);
        expect(output.edges[0]!.count, `edges at rest, ${seed}`).toBe(0);
        expect(output.bands, `bands at rest, ${seed}`).toEqual([]);
        expect(pipeline.status().speedRpm, `speed at rest, ${seed}`).toBe(0);
        pipeline.process([samples.subarray(restSamples)], samples.length - restSamples);
        if (noiseDb > 20) expect(output.edges[0]!.count, `edges of teeth, ${seed}`).toBeGreaterThan(40);
      }
    },
  );
});
