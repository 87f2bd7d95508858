import { describe, expect, it } from 'vitest';
import type { Finding } from '@/signal/model';
import { sampled, testPipeline, testRig, toothWheel } from '@/signal/test-signals';

const rateHz = 10_000;

function bounces(volts: Float64Array, rig = testRig('single', 8)): Finding[] {
  const pipeline = testPipeline(rig, rateHz);
  const found: Finding[] = [];
  for (let at = 0; at < volts.length; at += 1000) {
    pipeline.process([volts.subarray(at, at + 1000)], Math.min(1000, volts.length - at));
    found.push(...pipeline.output.closedFindings);
    pipeline.drain();
  }
  return [...found, ...pipeline.status().findings].filter(({ code }) => code === 'edge-bounce');
}

/** A square of 100 Hz whose rising flank drops back for half a millisecond while `bouncing`. */
function square(t: number, bouncing: boolean): number {
  const phase = (t * 100) % 1;
  const high = phase < 0.5 && !(bouncing && phase > 0.05 && phase < 0.1);
  return high ? 3 : 0.2;
}

describe('edge bounce', () => {
  it('is found while flanks bounce, with how soon the second edge comes, and ends with it', () => {
    const found = bounces(sampled(60_000, rateHz, (t) => square(t, t > 2 && t < 4)));
    expect(found).toHaveLength(1);
    const { from, to, at, evidence, severity } = found[0]!;
    expect(severity).toBe('fault');
    expect(from).toBeGreaterThan(1.6);
    expect(from).toBeLessThan(2.4);
    expect(to).toBeGreaterThan(3.6);
    expect(to).toBeLessThan(4.6);
    expect(at).toBeGreaterThan(2);
    expect(at).toBeLessThan(3);
    expect(evidence.shortestS).toBeCloseTo(0.001, 3);
    expect(evidence.toothS).toBeCloseTo(0.009, 3);
  });

  it('is not said of a steady wheel, of a start from rest, nor of a sudden stop', () => {
    expect(bounces(sampled(40_000, rateHz, (t) => square(t, false)))).toEqual([]);
    const motion = (t: number) => (t < 1 ? 0 : t < 3 ? 15 * (t - 1) ** 2 : 60 + 60 * (Math.min(t, 5) - 3));
    expect(bounces(sampled(70_000, rateHz, (t) => 1.6 + Math.sin(2 * Math.PI * motion(t))))).toEqual([]);
    const gapped = toothWheel(36, 2, (t) => 8 * t);
    expect(bounces(sampled(40_000, rateHz, gapped), testRig('single', 36, 2))).toEqual([]);
  });
});
