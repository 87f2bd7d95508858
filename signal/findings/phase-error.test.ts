import { describe, expect, it } from 'vitest';
import { ringWidths, wholeTurns } from '@/signal/findings/lane-phases';
import { watchFindings } from '@/signal/findings/test-watch';
import { ringVolts, speeds } from '@/signal/findings/test-rings';
import type { Ring } from '@/signal/findings/test-rings';
import { stateWidths } from '@/signal/statistics/quadrature-phase';
import { testRig } from '@/signal/test-signals';

const rateHz = 5000;
const pair: Ring = {
  rateHz,
  seconds: 4,
  positions: 12,
  turnsAt: (t) => 8 * t,
  placesDeg: [0, 90],
  shape: 'sine',
};

function found(ring: Ring, sensing: 'quadrature' | 'three-hall' = 'quadrature') {
  const list = watchFindings(testRig(sensing, ring.positions), ring.rateHz, {}, ...ringVolts(ring));
  return list.filter(({ code }) => code === 'phase-error');
}

describe('phase error of a pair', () => {
  it('is a warning from 30 degrees on, with the place to move to', () => {
    const [one] = found({ ...pair, placesDeg: [0, 128] });
    expect(one).toMatchObject({ channel: 'B', severity: 'warn', outcome: 'found', to: null });
    expect(one!.evidence.errorDeg).toBeCloseTo(38, 0);
    expect(one!.evidence.narrowestDeg).toBeCloseTo(52, 0);
    expect(one!.openedS).toBeLessThan(2);
    expect(one!.remedy).toContain('0.106 of the tooth pitch');
    expect(one!.remedy).toContain('earlier');
  });

  it('is told on a wheel with a gap too', () => {
    const gapped: Ring = {
      ...pair,
      positions: 18,
      seconds: 6,
      placesDeg: [0, 130],
      spoil: (volts, channel, t) => ((8 * t * 18 - (channel * 130) / 360 + 18) % 18 < 16 ? volts : 1.65 - 1),
      turnsAt: (t) => 8 * t,
    };
    const rig = testRig('quadrature', 18, 2);
    const list = watchFindings(rig, rateHz, {}, ...ringVolts({ ...gapped, rateHz }));
    const [one] = list.filter(({ code }) => code === 'phase-error');
    expect(one).toMatchObject({ severity: 'warn' });
    expect(one!.evidence.errorDeg).toBeCloseTo(40, -1);
  });

  it('is the same in reverse, and whatever the speed does', () => {
    const turned = { ...pair, placesDeg: [0, 52], turnsAt: speeds([0, -4], [4, -10]) };
    expect(found(turned)[0]!.evidence.errorDeg).toBeCloseTo(-38, 0);
  });

  it('is a fault where a state is less than 45 degrees wide, by phase or by duty', () => {
    expect(found({ ...pair, placesDeg: [0, 143] })[0]!.severity).toBe('fault');
    const [narrow] = found({ ...pair, rateHz: 20_000, shape: { duty: [0.35, 0.35] } });
    expect(narrow).toMatchObject({ severity: 'fault' });
    expect(narrow!.message).toContain('35 % and 35 %');
  });

  it('comes with the fault and goes with it', () => {
    // B's sensor slips at 3 s and is back at 7 s.
    const slips = (t: number) => (t > 3 && t < 7 ? 1.65 + Math.sin(2 * Math.PI * (96 * t - 135 / 360)) : NaN);
    const [one, more] = found({
      ...pair,
      seconds: 12,
      spoil: (volts, channel, t) => (channel === 1 && !Number.isNaN(slips(t)) ? slips(t) : volts),
    });
    expect(more).toBeUndefined();
    expect(one!.from).toBeGreaterThan(2.8);
    expect(one!.openedS).toBeLessThan(4.5);
    expect(one!.to).toBeGreaterThan(6.5);
    expect(one!.to).toBeLessThan(8);
  });

  it('is not said within the limits, of noise, of uneven teeth, nor across stops and reversals', () => {
    for (const places of [72, 90, 112]) {
      const busy = speeds([0, 0], [1, 8], [3, 8], [4, 0], [4.5, 0], [5.5, -8], [7, -8], [8, 6]);
      const sound: Ring = { ...pair, placesDeg: [0, places], turnsAt: busy, seconds: 10 };
      expect(found({ ...sound, noiseV: 0.04, unevenness: 0.01 })).toEqual([]);
      expect(found({ ...sound, shape: { duty: [0.5, 0.5] } })).toEqual([]);
    }
  });

  it('is not made of the sample grid where switching edges stay in step with it', () => {
    for (const samples of [10, 12, 14.5, 21]) {
      const inStep = (t: number) => (t * rateHz) / (samples * 12);
      expect(found({ ...pair, turnsAt: inStep, shape: { duty: [0.5, 0.5] } })).toEqual([]);
    }
  });
});

describe('phase error of three lines', () => {
  const three: Ring = { ...pair, positions: 4, placesDeg: [0, 120, 240], turnsAt: (t) => 10 * t };

  it('names the line that is off its place', () => {
    const [one] = found({ ...three, placesDeg: [0, 142, 240] }, 'three-hall');
    expect(one).toMatchObject({ channel: 'V', severity: 'warn' });
    expect(one!.evidence.errorDeg).toBeCloseTo(22, 0);
    expect(one!.evidence.spreadDeg).toBeCloseTo(22, 0);
    const [first] = found({ ...three, placesDeg: [35, 120, 240] }, 'three-hall');
    expect(first).toMatchObject({ channel: 'U', severity: 'fault' });
  });

  it('is not said of a set within 15 degrees, nor is an inverted line taken for one', () => {
    // A fixed band beside the middle, and places that are 4 degrees off.
    const shape = { duty: [0.46, 0.46, 0.455] };
    expect(found({ ...three, rateHz: 20_000, shape, placesDeg: [0, 116, 243.5] }, 'three-hall')).toEqual([]);
    expect(found({ ...three, placesDeg: [0, 125, 236] }, 'three-hall')).toEqual([]);
    expect(found({ ...three, placesDeg: [0, 300, 240] }, 'three-hall')).toEqual([]);
  });
});

describe('widths of states', () => {
  it('agree with the formula for a pair', () => {
    for (const [phase, dutyA, dutyB] of [
      [90, 0.5, 0.5],
      [130, 0.4, 0.6],
      [30, 0.3, 0.7],
      [290, 0.55, 0.2],
    ] as const) {
      const widths = ringWidths(
        {
          cycles: 9,
          fromS: 0,
          toS: 1,
          periodS: 0.1,
          riseDeg: [0, phase],
          duty: [dutyA, dutyB],
          scatterDeg: 0,
        },
        [2, 1],
      );
      const told = stateWidths(phase, dutyA, dutyB);
      expect(told.ok).toBe(true);
      if (!told.ok) return;
      expect(widths[0b10]).toBeCloseTo(told.value.aOnlyDeg, 9);
      expect(widths[0b11]).toBeCloseTo(told.value.bothDeg, 9);
      expect(widths[0b01]).toBeCloseTo(told.value.bOnlyDeg, 9);
      expect(widths[0b00]).toBeCloseTo(told.value.noneDeg, 9);
    }
  });

  it('come from whole turns of at least eight cycles', () => {
    const of = (pulsesPerTurn: number, missingPulses = 0) =>
      wholeTurns({ pulsesPerTurn, missingPulses, gearRatio: 1, widthClasses: null });
    expect([of(1), of(3), of(8), of(9), of(60), of(6, 1), of(36, 2)]).toEqual([8, 9, 8, 9, 60, 10, 34]);
  });
});
