import { describe, expect, it } from 'vitest';
import { rigInput, settingsInput } from '@/server/contract';
import { demoRigs } from '@/simulator/demo-lab';
import { createRig } from '@/simulator/rig-model';

describe('demo lab', () => {
  it('is what the public contract takes', () => {
    for (const demo of demoRigs) {
      expect(rigInput.safeParse(demo.rig).error).toBeUndefined();
      expect(settingsInput.safeParse(demo.settings).error).toBeUndefined();
      expect(demo.rig.name).toBe(demo.name);
    }
    expect(demoRigs.map((demo) => demo.rig.sensing)).toEqual(['single', 'quadrature', 'single']);
  });

  it('repeats its motion and its faults together, and is healthy for most of the time', () => {
    for (const { spec } of demoRigs) {
      const motionS = spec.motion.segments.reduce((sum, segment) => sum + segment.durationS, 0);
      expect(spec.loopS).toBeCloseTo(motionS, 9);
      const rig = createRig(spec, 1);
      const seconds = Array.from({ length: Math.floor(motionS) }, (_, s) => s + 0.5);
      const ill = seconds.filter((tS) => rig.faultsAt(tS).length > 0);
      expect(ill.length).toBeGreaterThan(0);
      expect(ill.length / seconds.length).toBeLessThan(0.35);
    }
  });

  it('turns as fast as its rig is rated for, at most', () => {
    for (const { spec, rig } of demoRigs) {
      const fastest = Math.max(...spec.motion.segments.map((segment) => Math.abs(segment.toRpm)));
      expect(fastest).toBeLessThanOrEqual(rig.ratedRpm!);
    }
  });
});
