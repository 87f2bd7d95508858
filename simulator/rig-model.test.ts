import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { demoRigs } from '@/simulator/demo-lab';
import { createRig, type RigSpec } from '@/simulator/rig-model';

const steady: RigSpec = {
  rateHz: 10_000,
  motion: { startRpm: 0, segments: [{ durationS: 10, toRpm: 0 }] },
  wheel: { kind: 'toothed', positions: 12, pitchMm: 8, modulationMt: 0 },
  gapMm: 1,
  channels: [
    {
      name: 'A',
      placeDeg: 0,
      sensor: { kind: 'linear', quiescentV: 2.5, sensitivityMvPerMt: 25, lowRailV: 0, highRailV: 5 },
      electronics: { noiseRmsV: 0 },
    },
  ],
  adc: { kind: 'volts' },
  faults: [],
};

function withElectronics(electronics: RigSpec['channels'][number]['electronics']): RigSpec {
  return { ...steady, channels: steady.channels.map((channel) => ({ ...channel, electronics })) };
}

function turning(rpm: number, spec: Partial<RigSpec> = {}): RigSpec {
  return { ...steady, motion: { startRpm: rpm, segments: [{ durationS: 10, toRpm: rpm }] }, ...spec };
}

/** Instants at which the samples pass the level, by straight lines between them. */
function crossings(
  volts: ArrayLike<number>,
  level: number,
  rateHz: number,
): { t: number; rising: boolean }[] {
  const out: { t: number; rising: boolean }[] = [];
  for (let i = 1; i < volts.length; i += 1) {
    const before = (volts[i - 1] as number) - level;
    const now = (volts[i] as number) - level;
    if (before < 0 !== now < 0) out.push({ t: (i - 1 + before / (before - now)) / rateHz, rising: now >= 0 });
  }
  return out;
}

describe('rig model', () => {
  it('gives the same samples however the run is cut', () => {
    for (const demo of demoRigs) {
      const total = 6000;
      const whole = createRig(demo.spec, 5).block(0, total);
      const cuts = fc.array(fc.integer({ min: 1, max: total - 1 }), { maxLength: 12 });
      fc.assert(
        fc.property(cuts, (points) => {
          const rig = createRig(demo.spec, 5);
          const edges = [0, ...[...new Set(points)].sort((a, b) => a - b), total];
          for (let i = 1; i < edges.length; i += 1) {
            const from = edges[i - 1] as number;
            const to = edges[i] as number;
            rig.block(from, to - from).forEach((array, c) => {
              expect(array).toEqual(whole[c]?.subarray(from, to));
            });
          }
        }),
        { numRuns: 15 },
      );
    }
  });

  it('goes back and forth without forgetting', () => {
    const rig = createRig(demoRigs[2]!.spec, 3);
    const later = rig.block(5000, 300);
    rig.block(100, 50);
    expect(rig.block(5000, 300)).toEqual(later);
  });

  it('makes another wheel and other noise from another seed', () => {
    const { spec } = demoRigs[0]!;
    expect(createRig(spec, 1).block(100_000, 500)).not.toEqual(createRig(spec, 2).block(100_000, 500));
  });

  it('has the noise that was asked for', () => {
    const [volts] = createRig(withElectronics({ noiseRmsV: 0.02 }), 9).block(0, 100_000);
    const samples = Array.from(volts!);
    const mean = samples.reduce((sum, v) => sum + v, 0) / samples.length;
    const power = samples.reduce((sum, v) => sum + (v - mean) ** 2, 0) / samples.length;
    // The rms of 1e5 samples is known to 0.22 %; five of that.
    expect(Math.abs(Math.sqrt(power) / 0.02 - 1)).toBeLessThan(0.011);
    expect(Math.abs(mean - 2.5)).toBeLessThan(5 * (0.02 / Math.sqrt(samples.length)));
  });

  it('has the hum that was asked for, and no other line', () => {
    const [volts] = createRig(withElectronics({ noiseRmsV: 0, humV: 0.05, humHz: 50 }), 9).block(0, 10_000);
    const line = (hz: number) => {
      let re = 0;
      let im = 0;
      volts!.forEach((v, i) => {
        re += v * Math.cos((2 * Math.PI * hz * i) / 10_000);
        im += v * Math.sin((2 * Math.PI * hz * i) / 10_000);
      });
      return (2 * Math.hypot(re, im)) / volts!.length;
    };
    expect(line(50)).toBeCloseTo(0.05, 6);
    expect(line(60)).toBeLessThan(1e-6);
  });

  it('stops at the ends of the converter', () => {
    const wheel = { kind: 'toothed', positions: 12, pitchMm: 8, modulationMt: 300 } as const;
    const spec = turning(300, {
      wheel,
      adc: { kind: 'codes', bits: 10, voltsPerCode: 4 / 1024, codeOffset: -100 },
    });
    const [codes] = createRig(spec, 1).block(0, 5000);
    expect(codes).toBeInstanceOf(Int16Array);
    expect(Math.min(...codes!)).toBe(0);
    expect(Math.max(...codes!)).toBe(1023);
  });

  it('crosses the middle at the instants of the truth, the missing teeth left out', () => {
    const wheel: RigSpec['wheel'] = {
      kind: 'toothed',
      positions: 12,
      missing: [10, 11],
      pitchMm: 8,
      modulationMt: 80,
      pitchErrors: { 3: 0.06 },
    };
    const rig = createRig(turning(90, { wheel, rateHz: 50_000 }), 1);
    const [volts] = rig.block(0, 100_000);
    const measured = crossings(volts!, 2.5, 50_000);
    const expected = rig.truth.toothTimes(0, rig.timeOf(99_999));
    expect(expected).toHaveLength(60);
    expect(measured.map((m) => m.rising)).toEqual(expected.map((e) => e.rising));
    measured.forEach((m, i) => expect(Math.abs(m.t - expected[i]!.tS)).toBeLessThan(1e-7));
  });

  it('crosses the middle at the instants of the truth on an uneven pole ring that reverses', () => {
    const rig = createRig(
      {
        ...steady,
        rateHz: 50_000,
        motion: {
          startRpm: 120,
          segments: [
            { durationS: 1, toRpm: -120 },
            { durationS: 1, toRpm: 120 },
          ],
        },
        wheel: {
          kind: 'pole-ring',
          positions: 8,
          pairLengthMm: 6,
          thicknessMm: 2,
          remanenceT: 0.24,
          pitchErrorRms: 0.03,
        },
      },
      4,
    );
    const [volts] = rig.block(0, 100_000);
    const measured = crossings(volts!, 2.5, 50_000);
    const expected = rig.truth.toothTimes(0, rig.timeOf(99_999));
    expect(expected.some((e) => e.direction === 'reverse')).toBe(true);
    expect(measured.map((m) => m.rising)).toEqual(expected.map((e) => e.rising));
    measured.forEach((m, i) => expect(Math.abs(m.t - expected[i]!.tS)).toBeLessThan(2e-6));
  });

  it('lets A lead B while the shaft turns forward', () => {
    const { spec } = demoRigs[1]!;
    const rig = createRig(spec, 1);
    const place = spec.channels[1]!.placeDeg / 360 / spec.wheel.positions;
    const a = rig.truth.toothTimes(10, 11).filter((pass) => pass.rising);
    const b = rig.truth.toothTimes(10, 11, place).filter((pass) => pass.rising);
    const period = a[1]!.tS - a[0]!.tS;
    const lag = b.find((pass) => pass.tS > a[0]!.tS)!.tS - a[0]!.tS;
    expect(a[0]!.direction).toBe('forward');
    expect((360 * lag) / period).toBeGreaterThan(80);
    expect((360 * lag) / period).toBeLessThan(105);
  });

  it('runs its clock as much too fast as asked', () => {
    const rig = createRig({ ...steady, clockPpm: 100 }, 1);
    expect(rig.timeOf(10_000)).toBeCloseTo(1 / 1.0001, 12);
  });
});
