/**
 * Single values that do not come from this project: identities of the trade and worked examples. The source stands beside
 * each; where it says "formula", the value was computed from the formula named and nothing else.
 */
import { describe, expect, it } from 'vitest';
import { consequencesOf } from '@/signal/consequences';
import { runDetector } from '@/signal/detector';
import { createDetector, setThresholds } from '@/signal/detector-state';
import { createDirectionTracker, stepTo } from '@/signal/direction-tracker';
import { defaultSettings } from '@/signal/model';
import { speedLimits } from '@/signal/speed-limits';
import { SpeedMeter } from '@/signal/speed-meter';
import { illegalStep, stepTable } from '@/signal/step-table';
import { normal, sampled, seeded, testPipeline, testRig, toothWheel } from '@/signal/test-signals';

function feedTeeth(meter: SpeedMeter, times: number[], places: number[] = times.map((_, k) => k)): void {
  times.forEach((t, k) => {
    meter.t = t;
    meter.sigmaS = 0;
    meter.add(places[k]!);
  });
}

/** Net steps and errors of a walk through states of a ring, from all channels known. */
function walk(sensing: 'quadrature' | 'three-hall', states: number[]): { net: number; errors: number } {
  const table = stepTable(sensing)!;
  const net = { net: 0, errors: 0 };
  states.slice(1).forEach((to, k) => {
    const step = table.steps[states[k]! * table.states + to]!;
    if (step === illegalStep) net.errors++;
    else net.net += step;
  });
  return net;
}

describe('speed from pulses', () => {
  it('36 teeth at 3000 rpm pass at 1800 Hz (f = N n / 60)', () => {
    expect(
      consequencesOf({ ...testRig('single', 36), ratedRpm: 3000 }, defaultSettings, 50_000).toothHz,
    ).toBe(1800);
  });

  it('four teeth 90.9/89.1/90.3/89.7 degrees apart read 1188.12, 1212.12, 1196.01, 1204.01 rpm at 1200 (formula)', () => {
    const pitches = [90.9, 89.1, 90.3, 89.7];
    const meter = new SpeedMeter('tooth', 0.1, 4, 1);
    let t = 0;
    const read = pitches.map((pitch) => {
      feedTeeth(meter, [t, t + pitch / (6 * 1200)]);
      t += pitch / (6 * 1200);
      const { rpm } = meter.latest;
      meter.reset();
      return rpm;
    });
    [1188.12, 1212.12, 1196.01, 1204.01].forEach((wanted, k) =>
      expect(Math.abs(read[k]! - wanted)).toBeLessThan(0.01),
    );
    const turn = new SpeedMeter('turn', 0.1, 4, 1);
    feedTeeth(turn, [0, 12.625e-3, 25e-3, 37.5417e-3, 50e-3]);
    expect(turn.latest.rpm).toBeCloseTo(1200, 6);
  });

  it('a window of ten periods has 0.4767 us of period error by least squares for 5 us a tooth, 0.7071 us by its ends (formula)', () => {
    const random = normal(seeded(60));
    const periods: number[] = [];
    let stated = 0;
    const runs = 20_000;
    const window = new SpeedMeter('window', 10.5e-3, 1, 1);
    for (let run = 0; run < runs; run++) {
      window.reset();
      for (let k = 0; k <= 10; k++) {
        window.t = k * 1e-3 + 5e-6 * random() + 1e-4;
        window.sigmaS = 5e-6;
        window.add(k);
      }
      periods.push(60 / window.latest.rpm);
      stated += ((window.latest.errorRpm / window.latest.rpm) * 1e-3) / runs;
    }
    const mean = periods.reduce((sum, p) => sum + p, 0) / periods.length;
    const rms = Math.sqrt(periods.reduce((sum, p) => sum + (p - mean) ** 2, 0) / periods.length);
    expect(rms / 0.4767e-6).toBeGreaterThan(0.97);
    expect(rms / 0.4767e-6).toBeLessThan(1.03);
    // What it says of its error is measured from a handful of teeth, and wide enough for that.
    expect(stated / 0.4767e-6).toBeGreaterThan(1);
    expect(stated / 0.4767e-6).toBeLessThan(1.7);
    const ends = new SpeedMeter('turn', 1, 10, 1);
    let squares = 0;
    let said = 0;
    for (let run = 0; run < runs; run++) {
      ends.reset();
      for (let k = 0; k <= 10; k++) {
        ends.t = k * 1e-3 + 5e-6 * random() + 1e-4;
        ends.sigmaS = 5e-6;
        ends.add(k);
      }
      squares += (6 / ends.latest.rpm - 1e-3) ** 2 / runs;
      said += ((ends.latest.errorRpm / ends.latest.rpm) * 1e-3) / runs;
    }
    expect(Math.sqrt(squares) / 0.7071e-6).toBeGreaterThan(0.97);
    expect(Math.sqrt(squares) / 0.7071e-6).toBeLessThan(1.03);
    expect(said / 0.7071e-6).toBeGreaterThan(1);
    expect(said / 0.7071e-6).toBeLessThan(1.5);
  });

  it('six teeth and 0.25 s since the last bound the speed to 40 rpm (60 / (N dt))', () => {
    const rig = testRig('single', 6);
    const settings = { ...defaultSettings, speed: { ...defaultSettings.speed, stoppedAfterS: 0.25 } };
    expect(consequencesOf(rig, settings, null).lowestRpm).toBe(40);
    expect(speedLimits(rig, settings.speed, null, null).floorRpm).toBe(40);
    const turning = sampled(
      30_000,
      10_000,
      toothWheel(6, 0, (t) => 5 * Math.min(t, 2.5)),
    );
    const stopped = testPipeline(rig, 10_000, settings);
    stopped.process([turning], turning.length);
    expect(stopped.status()).toMatchObject({ state: 'stopped', speedRpm: 0 });
    expect(stopped.status().speedAtMostRpm).toBeCloseTo(40, 9);

    // While it may still turn: never below the formula, and above it only by what a wheel of teeth that look even may be off.
    const running = testPipeline(rig, 10_000);
    let lastS = NaN;
    const seen: number[] = [];
    for (let at = 0; at < 28_500; at += 50) {
      running.process([turning.subarray(at, at + 50)], 50);
      const { count, midT, flags } = running.output.edges[0]!;
      for (let i = 0; i < count; i++) if (flags[i]! & 1) lastS = midT[i]!;
      running.drain();
      const { nowS, speedAtMostRpm } = running.status();
      if (nowS - lastS > 0.2 && nowS < 2.85) seen.push((speedAtMostRpm! * (nowS - lastS) * 6) / 60);
    }
    expect(seen.length).toBeGreaterThan(20);
    for (const share of seen) {
      expect(share).toBeGreaterThan(1);
      expect(share).toBeLessThan(1.03);
    }
  });

  it('linear interpolation of a sine at ten samples a period is off by 0.00646 sample steps at most (formula); we less', () => {
    const rateHz = 1000;
    const hz = 100.0137;
    const volts = sampled(400_000, rateHz, (t) => Math.sin(2 * Math.PI * hz * t - 1));
    const worstOf = (count: number, middles: ArrayLike<number>, flags: ArrayLike<number>) => {
      let worst = 0;
      for (let i = 0; i < count; i++) {
        const cycles = 2 * (middles[i]! * hz - 1 / (2 * Math.PI));
        worst = Math.max(worst, (Math.abs(cycles - Math.round(cycles)) / (2 * hz)) * rateHz);
        expect(flags[i]! & 1).toBe(Math.abs(Math.round(cycles)) % 2 === 0 ? 1 : 0);
      }
      return worst;
    };
    const detector = createDetector(0, false);
    setThresholds(detector, 0.2, -0.2);
    runDetector(detector, volts, 0, volts.length - 1, 0, { rejected: () => {}, wobble: () => {} });
    const { count, midAt, flags } = detector.edges;
    expect(count).toBeGreaterThan(79_000);
    const line = worstOf(
      count,
      midAt.map((at) => at / rateHz),
      flags,
    );
    expect(line / 0.00646).toBeGreaterThan(0.98);
    expect(line / 0.00646).toBeLessThan(1.02);
    const pipeline = testPipeline(testRig('single', 1), rateHz, {
      band: { mode: 'fixed', operateV: 0.2, releaseV: -0.2 },
    });
    pipeline.process([volts], 400_000);
    const edges = pipeline.output.edges[0]!;
    expect(edges.count).toBe(count);
    expect(worstOf(edges.count, edges.midT, edges.flags)).toBeLessThan(0.6 * line);
  });

  it('a threshold a fifth of the amplitude above the middle makes a duty of 0.435906 (0.5 - asin(c/A)/pi)', () => {
    const band = { mode: 'fixed' as const, operateV: 0.201, releaseV: 0.199 };
    const pipeline = testPipeline(testRig('single', 1), 100_000, { band });
    pipeline.process([sampled(200_000, 100_000, (t) => Math.sin(2 * Math.PI * 100 * t))], 200_000);
    expect(pipeline.status().channels[0]!.duty).toBeCloseTo(0.435906, 5);
  });
});

describe('rings of states', () => {
  it('quadrature: 0,2,3,1,0 / back / 0,3,0 / 0,2,0,2,3 give (+4, 0) (-4, 0) (0, 2 errors) (+2, 0) (table of the code)', () => {
    expect(walk('quadrature', [0, 2, 3, 1, 0])).toEqual({ net: 4, errors: 0 });
    expect(walk('quadrature', [0, 1, 3, 2, 0])).toEqual({ net: -4, errors: 0 });
    expect(walk('quadrature', [0, 3, 0])).toEqual({ net: 0, errors: 2 });
    expect(walk('quadrature', [0, 2, 0, 2, 3])).toEqual({ net: 2, errors: 0 });
  });

  it('flips the direction only after two steps the same way', () => {
    const tracker = createDirectionTracker(stepTable('quadrature')!);
    const levels: [number, boolean][] = [
      [0, true],
      [1, true],
      [0, false],
      [1, false],
      [0, true],
      [0, false],
      [1, true],
      [0, true],
    ];
    expect(levels.map(([channel, high]) => (stepTo(tracker, channel, high), tracker.sense))).toEqual([
      0, 0, 1, 1, 1, 1, -1, -1,
    ]);
  });

  it('64 pulses at 10 kS/s can be followed to 2343.75 rpm (60 fs / (4 PPR))', () => {
    const consequences = consequencesOf(testRig('quadrature', 64), defaultSettings, 10_000);
    expect(consequences.highestRpm).toBe(2343.75);
    expect(consequences.recommendedRpm).toBe(1171.875);
    expect(
      consequencesOf(testRig('quadrature', 64), defaultSettings, 10_000, 70 / 90).highestRpm! / 2343.75,
    ).toBeCloseTo(0.778, 3);
  });

  it('three-hall: 1,3,2,6,4,5,1 is +6, back -6, 1 to 2 a skip, 0 and 7 never (a motor-drive maker on Hall signals)', () => {
    expect(walk('three-hall', [1, 3, 2, 6, 4, 5, 1])).toEqual({ net: 6, errors: 0 });
    expect(walk('three-hall', [1, 5, 4, 6, 2, 3, 1])).toEqual({ net: -6, errors: 0 });
    expect(walk('three-hall', [1, 2])).toEqual({ net: 0, errors: 1 });
    expect(walk('three-hall', [1, 0])).toEqual({ net: 0, errors: 1 });
    expect(walk('three-hall', [3, 7])).toEqual({ net: 0, errors: 1 });
  });

  it('four pole pairs at 100 Hz electrical are 1500 rpm and 24 edges a turn (n = 60 f / p)', () => {
    const rig = testRig('three-hall', 4);
    expect(consequencesOf({ ...rig, ratedRpm: 1500 }, defaultSettings, null).toothHz).toBe(100);
    const pipeline = testPipeline(rig, 20_000);
    const lines = [0, 1, 2].map((lane) =>
      sampled(40_000, 20_000, (t) => 1.65 + Math.sin(2 * Math.PI * (100 * t - lane / 3))),
    );
    let edges = 0;
    for (let at = 0; at < 40_000; at += 5000) {
      pipeline.process(
        lines.map((line) => line.subarray(at, at + 5000)),
        5000,
      );
      // 25 whole turns from a quarter of a state after 0.9 s on.
      for (const { count, midT } of pipeline.output.edges)
        for (let i = 0; i < count; i++) if (midT[i]! >= 0.9004 && midT[i]! < 1.9004) edges++;
      pipeline.drain();
    }
    expect(edges / 25).toBe(24);
    const status = pipeline.status();
    expect(status).toMatchObject({ direction: 'forward', findings: [] });
    expect(Math.abs(status.speedRpm! - 1500)).toBeLessThan(1e-3);
  });
});

describe('a 60-2 wheel at 3000 rpm', () => {
  it('has 333.333 us between teeth and 1000 us across the gap, and reads 3000 rpm, not 2900 (formula)', () => {
    // So fast that a straight line between two samples is no further off than the tolerance: at 200 kS/s it is, by a tenth.
    const rateHz = 1_000_000;
    const pipeline = testPipeline(testRig('single', 60, 2), rateHz);
    const volts = sampled(
      rateHz,
      rateHz,
      toothWheel(60, 2, (t) => 50 * t),
    );
    const rises: number[] = [];
    for (let at = 0; at < rateHz; at += 50_000) {
      pipeline.process([volts.subarray(at, at + 50_000)], 50_000);
      const { count, midT, flags } = pipeline.output.edges[0]!;
      for (let i = 0; i < count; i++) if (flags[i]! & 1) rises.push(midT[i]!);
      pipeline.drain();
    }
    const spacings = rises.slice(1).map((t, k) => (t - rises[k]!) * 1e6);
    const settled = spacings.slice(120);
    const gaps = settled.filter((us) => us > 600);
    const teeth = settled.filter((us) => us <= 600);
    expect([gaps.length, teeth.length]).toEqual([47, 50 * 57 - 118]);
    for (const us of gaps) expect(Math.abs(us - 1000)).toBeLessThan(1e-3);
    for (const us of teeth) expect(Math.abs(us - 1000 / 3)).toBeLessThan(1e-3);
    const { speedRpm, speedErrorRpm, shaft } = pipeline.status();
    expect(Math.abs(speedRpm! - 3000)).toBeLessThan(1e-3);
    expect(speedErrorRpm).toBeLessThan(1e-3);
    expect(shaft.sync).toMatchObject({ state: 'synced' });
    expect(Math.abs(shaft.sync!.gapRatio! - 3)).toBeLessThan(1e-3);
    // Teeth counted as if none were missing.
    expect((60 * rises.length) / 60).toBe(2900);
  });
});
