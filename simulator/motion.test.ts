import { describe, expect, it } from 'vitest';
import { createMotion } from '@/simulator/motion';

describe('motion', () => {
  it('turns as the closed form of constant acceleration says', () => {
    const motion = createMotion({
      startRpm: 0,
      segments: [
        { durationS: 4, toRpm: 600 },
        { durationS: 4, toRpm: 0 },
      ],
    });
    // turns = (1/2) a t^2 with a = 10 / 4 turns per s^2.
    expect(motion.turnsAt(2)).toBeCloseTo(0.5 * 2.5 * 4, 12);
    expect(motion.turnsAt(4)).toBeCloseTo(20, 12);
    expect(motion.turnsAt(8)).toBeCloseTo(40, 12);
    expect(motion.turnsAt(8 * 1000 + 2)).toBeCloseTo(40_000 + 5, 8);
    expect(motion.speedAt(1)).toBeCloseTo(2.5, 12);
  });

  it('has a speed that is the slope of its angle, ripple and smooth segments included', () => {
    const motion = createMotion({
      startRpm: 0,
      segments: [
        { durationS: 3, toRpm: 900, shape: 'smooth' },
        { durationS: 2, toRpm: -300 },
        { durationS: 1, toRpm: 0, shape: 'smooth' },
      ],
      ripple: [{ order: 3, fraction: 0.05, phaseDeg: 30 }],
    });
    for (const t of [0.3, 1.1, 2.9, 3.4, 4.45, 4.6, 5.5]) {
      const h = 1e-5;
      const slope = (motion.turnsAt(t + h) - motion.turnsAt(t - h)) / (2 * h);
      expect(motion.speedAt(t)).toBeCloseTo(slope, 5);
    }
  });

  it('agrees with a fine integration of its speed', () => {
    const motion = createMotion({
      startRpm: 60,
      segments: [
        { durationS: 1, toRpm: 300, shape: 'smooth' },
        { durationS: 1, toRpm: 60 },
      ],
      ripple: [{ order: 2, fraction: 0.2 }],
    });
    const steps = 20_000;
    let turns = 0;
    for (let i = 0; i < steps; i += 1) turns += motion.speedAt(((i + 0.5) / steps) * 2) * (2 / steps);
    expect(motion.turnsAt(2)).toBeCloseTo(turns, 6);
  });

  it('parts the time where the shaft turns round', () => {
    const motion = createMotion({
      startRpm: 60,
      segments: [
        { durationS: 2, toRpm: -60 },
        { durationS: 2, toRpm: 60 },
      ],
    });
    const parts = motion.monotoneParts(0, 4);
    expect(parts.map((part) => part.toS)).toEqual([1, 2, 3, 4]);
  });

  it('refuses a programme that jumps when it repeats', () => {
    expect(() => createMotion({ startRpm: 0, segments: [{ durationS: 1, toRpm: 10 }] })).toThrow('startRpm');
  });
});
