import { describe, expect, it } from 'vitest';
import { defaultSettings } from '@/signal/model';
import { createPipeline } from '@/signal/pipeline';
import { sampled, testRig } from '@/signal/test-signals';

const rateHz = 10_000;

/** Of rising edges: how far the middle instants scatter about the true ones, rms, samples; the same for the line alone. */
function scatterOf(shape: (phase: number) => number, samplesPerTooth: number) {
  const toothHz = rateHz / samplesPerTooth;
  const volts = sampled(3 * rateHz, rateHz, (t) => 1.65 + shape(2 * Math.PI * toothHz * t));
  const made = createPipeline({
    rig: testRig('single', 60),
    settings: defaultSettings,
    rateHz,
    channels: ['A'],
    startIndex: 0,
  });
  if (!made.ok) throw new Error(made.issue.detail);
  made.value.process([volts], volts.length);
  const [edges] = made.value.output.edges;
  const ours: number[] = [];
  const line: number[] = [];
  for (let i = 0; i < edges!.count; i++) {
    if ((edges!.flags[i]! & 1) === 0 || edges!.t[i]! < 1) continue;
    const turns = edges!.midT[i]! * toothHz;
    const crossing = Math.round(turns) / toothHz;
    const before = Math.floor(crossing * rateHz);
    const [a, b] = [volts[before]! - 1.65, volts[before + 1]! - 1.65];
    ours.push((edges!.midT[i]! - crossing) * rateHz);
    line.push(before - a / (b - a) - crossing * rateHz);
  }
  expect(ours.length).toBeGreaterThan(200);
  return { ours: spread(ours), line: spread(line) };
}

function spread(values: readonly number[]): number {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  return Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / values.length);
}

// Formula: by the series of the sine about its middle the line misses by w^2 f (1 - f) (1 - 2 f) / 6, rms w^2 / 87.
describe('the bend of a flank between two samples is taken off its middle instant', () => {
  it.each([6.137, 8.137, 12.137, 20.137])('of a sine of %s samples a tooth', (samplesPerTooth) => {
    const { ours, line } = scatterOf(Math.sin, samplesPerTooth);
    const w = (2 * Math.PI) / samplesPerTooth;
    expect(Math.abs(line / ((w * w) / 87) - 1)).toBeLessThan(0.25);
    expect(ours).toBeLessThan(line / 2);
  });

  it.each([12.137, 20.137])('of flanks as of a hyperbolic tangent, %s samples a tooth', (samplesPerTooth) => {
    const { ours, line } = scatterOf((phase) => Math.tanh(2 * Math.sin(phase)), samplesPerTooth);
    expect(ours).toBeLessThan(0.6 * line);
  });
});
