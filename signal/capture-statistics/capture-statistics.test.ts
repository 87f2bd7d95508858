import { describe, expect, it } from 'vitest';
import { analyse } from '@/signal/analysis';
import type { Analysis, RigSetup, Settings } from '@/signal/model';
import { defaultSettings } from '@/signal/model';
import { normal, sampled, seeded, testRig, toothWheel } from '@/signal/test-signals';

const rateHz = 20_000;

function analysed(
  rig: RigSetup,
  seconds: number,
  volts: readonly ((t: number) => number)[],
  settings: Partial<Settings> = {},
): Analysis {
  const made = analyse(
    {
      rig,
      settings: { ...defaultSettings, ...settings },
      rateHz,
      channels: rig.channels.map(({ name }) => name),
    },
    [{ arrays: volts.map((of) => sampled(seconds * rateHz, rateHz, of)) }],
  );
  if (!made.ok) throw new Error(made.issue.detail);
  return made.value;
}

const wave = (turns: number) => Math.sin(2 * Math.PI * turns);

describe('statistics of a capture', () => {
  it('gives a sine pair its amplitudes, offsets, gain ratio and phase error, while the speed changes', () => {
    const noise = normal(seeded(5));
    const teeth = (t: number) => 150 * t + 20 * t * t;
    const { statistics } = analysed(testRig('quadrature', 20), 3, [
      (t) => 1.65 + 0.8 * wave(teeth(t)) + 0.004 * noise(),
      (t) => 1.5 + 0.64 * wave(teeth(t) - 83 / 360) + 0.004 * noise(),
    ]);
    const { A, B } = statistics!.channels;
    expect(A!.sine!.amplitudeV).toBeCloseTo(0.8, 3);
    expect(A!.sine!.offsetV).toBeCloseTo(1.65, 3);
    expect(B!.sine!.amplitudeV).toBeCloseTo(0.64, 3);
    expect(B!.sine!.residualRmsV).toBeLessThan(0.006);
    expect(statistics!.pair!.gainRatio).toBeCloseTo(1.25, 2);
    expect(Math.abs(statistics!.pair!.phaseDeg - 83)).toBeLessThan(5 * statistics!.pair!.standardErrorDeg);
    expect(statistics!.pair!.phaseErrorDeg).toBeCloseTo(-7, 0);
    expect(A!.riseS).toBeNull();
    expect(A!.dutyFactor!.mean).toBeCloseTo(0.5, 2);
  });

  it('gives a two-state signal its levels, transitions and duty', () => {
    const trapezoid = (t: number) => {
      const phase = (100 * t) % 1;
      return 0.2 + 3 * Math.max(0, Math.min(1, phase * 50, (0.31 - phase) * 50));
    };
    const { statistics } = analysed(testRig('single', 10), 2, [trapezoid]);
    const { levels, riseS, fallS, dutyFactor, overshootPct, extraMidCrossings } = statistics!.channels.A!;
    expect(levels!.lowV).toBeCloseTo(0.2, 1);
    expect(levels!.highV).toBeCloseTo(3.2, 1);
    // 10 ms a period, flanks of 2 % of it, of which 10 to 90 % is four fifths.
    expect(riseS!.mean).toBeCloseTo(0.00016, 5);
    expect(fallS!.mean).toBeCloseTo(0.00016, 5);
    expect(dutyFactor!.mean).toBeCloseTo(0.29, 2);
    expect(overshootPct).toBeLessThan(2);
    expect(extraMidCrossings).toBe(0);
  });

  it('finds the jitter that was put in, with the wheel pattern and a ramp taken out', () => {
    const teeth = 12;
    const pitch = seeded(9);
    const errors = Array.from({ length: teeth }, () => 0.04 * (pitch() - 0.5));
    const shake = normal(seeded(11));
    const jitterPitches = 0.002;
    // Each tooth is a straight ramp about its own instant.
    const own = Array.from({ length: 3000 }, (_, k) => k + errors[k % teeth]! + jitterPitches * shake());
    const place = (t: number) => 1 + 300 * t + 2 * t * t;
    const volts = (t: number) => {
      const x = place(t);
      const k = Math.round(x);
      const d = x - own[k]!;
      return d < -0.25 ? 1 : d < 0.25 ? 1.5 + 2 * d : 2;
    };
    const signal = (t: number) => {
      const x = place(t) % 1;
      return x > 0.25 && x < 0.75 ? 2 - 4 * (x - 0.25) * 0.5 : volts(t);
    };
    const { statistics } = analysed(testRig('single', teeth), 6, [signal], {
      band: { mode: 'fixed', operateV: 1.6, releaseV: 1.4 },
    });
    const { jitter } = statistics!;
    expect(jitter!.withoutPattern).toBe(true);
    const periodS = 1 / 312;
    expect(jitter!.periodRmsS / (Math.SQRT2 * jitterPitches * periodS)).toBeGreaterThan(0.85);
    expect(jitter!.periodRmsS / (Math.SQRT2 * jitterPitches * periodS)).toBeLessThan(1.15);
    expect(jitter!.cycleToCycleRmsS / jitter!.periodRmsS).toBeCloseTo(Math.sqrt(3), 0);
    expect(jitter!.timeIntervalErrorToothDeg).toBeCloseTo(360 * jitterPitches, 1);
  });

  it('shows what of speed and swing repeats with the shaft, also across the gap of a wheel', () => {
    // The angle sways by 0.01 rad once a turn at 10 turns a second: the speed by 1 %.
    const sway = 0.01 / (2 * Math.PI);
    const turnsAt = (t: number) => 10 * t + sway * Math.sin(2 * Math.PI * 10 * t);
    const { statistics } = analysed(testRig('single', 36, 2), 4, [toothWheel(36, 2, turnsAt)]);
    const { speedOrders, turns } = statistics!;
    expect(speedOrders!.meanRpm).toBeCloseTo(600, 0);
    const first = speedOrders!.lines.find(({ order }) => order === 1);
    expect(first!.amplitude).toBeGreaterThan(5.4);
    expect(first!.amplitude).toBeLessThan(6.3);
    expect(turns.length).toBeGreaterThan(30);
    for (const { rpm } of turns) expect(rpm).toBeCloseTo(600, 1);

    const modulated = (t: number) =>
      1.65 + (1 + 0.2 * Math.cos(2 * Math.PI * 10 * t)) * Math.sin(2 * Math.PI * 240 * t);
    const swing = analysed(testRig('single', 24), 4, [modulated]).statistics!.swingOrders!;
    expect(swing.meanV).toBeCloseTo(2, 1);
    expect(swing.lines.find(({ order }) => order === 1)!.amplitude).toBeCloseTo(0.4, 1);
  });

  it('is silent where the shaft never turned, and signed by direction', () => {
    expect(analysed(testRig('single', 10), 1, [() => 1.65]).statistics).toBeNull();
    const reverse = analysed(testRig('quadrature', 20), 2, [
      (t) => 1.65 + wave(-200 * t),
      (t) => 1.65 + wave(-200 * t - 0.25),
    ]);
    expect(reverse.statistics!.turns[0]!.rpm).toBeCloseTo(-600, 3);
    expect(Math.abs(reverse.statistics!.pair!.phaseErrorDeg)).toBeLessThan(0.1);
  });
});
