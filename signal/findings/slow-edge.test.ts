import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import type { Watched } from '@/signal/findings/test-watch';
import type { RigSetup, SensorKind, Settings } from '@/signal/model';
import { normal, sampled, seeded, testChannel, testRig } from '@/signal/test-signals';
import { poles, voltsOf, withFaults } from '@/simulator/test-rigs';

const rateHz = 20_000;

function rigOf(kind: SensorKind, pulsesPerTurn = 4): RigSetup {
  const channel = testChannel('A', 'A');
  return testRig('single', pulsesPerTurn, 0, {
    channels: [{ ...channel, sensor: { ...channel.sensor, kind, supplyV: 5 } }],
  });
}

/** An open drain at `toothHz`, pulled up to 3.3 V with the time constant `tauS`, down at once; volts at the samples. */
function openDrain(seconds: number, toothHz: number, tauS: (t: number) => number): Float64Array {
  const noise = normal(seeded(5));
  let volts = 0.2;
  return sampled(seconds * rateHz, rateHz, (t) => {
    const open = (t * toothHz) % 1 < 0.5;
    volts = open ? volts + (3.3 - volts) * (1 - Math.exp(-1 / rateHz / tauS(t))) : 0.2;
    return volts + 0.01 * noise();
  });
}

function slow(volts: Float64Array, kind: SensorKind, settings: Partial<Settings> = {}): Watched[] {
  return watchFindings(rigOf(kind), rateHz, settings, volts).filter(({ code }) => code === 'slow-edge');
}

describe('slow edge', () => {
  it.each([30, 100])(
    'a pull-up that went weak is found within 2 s and goes with it, %i teeth a second',
    (toothHz) => {
      const found = slow(
        openDrain(9, toothHz, (t) => (t > 3 && t < 6 ? 0.15 / toothHz : 20e-6)),
        'switch',
      );
      expect(found).toHaveLength(1);
      const { openedS, to, evidence, remedy } = found[0]!;
      expect(openedS).toBeGreaterThan(3);
      expect(openedS).toBeLessThan(5);
      expect(to).toBeGreaterThan(5.5);
      expect(to).toBeLessThan(7.1);
      expect(evidence.slow).toBe('rising');
      expect(evidence.riseS).toBeGreaterThan(5 * (evidence.fallS as number));
      expect(remedy).toContain('pull-up');
    },
  );

  it('an ordinary pull-up on a long cable is none, nor is a filter that rounds both flanks', () => {
    const line = openDrain(4, 100, () => 47e-6);
    expect(slow(line, 'switch')).toEqual([]);
    const filter = { kind: 'lowpass', family: 'butterworth', order: 2, cutoffHz: 250 } as const;
    expect(slow(line, 'switch', { filter })).toEqual([]);
  });

  it('both flanks too long for the speed are found without a filter', () => {
    const trapezoid = sampled(4 * rateHz, rateHz, (t) => {
      const place = (t * 50) % 1;
      return 0.2 + 3 * Math.min(1, (0.5 - Math.abs(place - 0.5)) / 0.4);
    });
    const found = slow(trapezoid, 'latch');
    expect(found).toHaveLength(1);
    expect(found[0]!.evidence.slow).toBe('both');
    expect(found[0]!.evidence.ofPeriodPercent).toBeGreaterThan(55);
  });

  it('a sine of a linear sensor is none, until noise moves its edges by more than a fiftieth of a tooth', () => {
    const sine = (sigmaV: number): Float64Array => {
      const noise = normal(seeded(9));
      return sampled(5 * rateHz, rateHz, (t) => 1.65 + Math.sin(2 * Math.PI * 40 * t) + sigmaV * noise());
    };
    expect(slow(sine(0.06), 'linear')).toEqual([]);
    const found = slow(sine(0.2), 'linear');
    expect(found).toHaveLength(1);
    const { evidence, openedS, message } = found[0]!;
    expect(openedS).toBeLessThan(2.5);
    // Noise over slope: 0.2 V / (2 pi 40 Hz 1 V) = 0.8 ms.
    expect(evidence.scatterS).toBeGreaterThan(0.5e-3);
    expect(evidence.scatterS).toBeLessThan(1.1e-3);
    expect(evidence.helpingCutoffHz).toBeCloseTo(120, -1);
    expect(message).toContain('V/s');
    const cutoffHz = evidence.helpingCutoffHz as number;
    const filter = { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz } as const;
    expect(slow(sine(0.2), 'linear', { filter })).toEqual([]);
  });

  it('a sine that had few samples a tooth is none: what was taken for noise then was signal', () => {
    // 5 samples a tooth until 3 s, 40 from 3.2 s on.
    const seconds = 9;
    const turns = (t: number) => {
      const into = Math.min(Math.max(t - 3, 0), 0.2);
      return 4000 * Math.min(t, 3) + 4000 * into - 8750 * into ** 2 + 500 * Math.max(0, t - 3.2);
    };
    const noise = normal(seeded(9));
    const sine = sampled(
      seconds * rateHz,
      rateHz,
      (t) => 1.65 + Math.sin(2 * Math.PI * turns(t)) + 0.03 * noise(),
    );
    expect(slow(sine, 'linear')).toEqual([]);
  });

  it('sees the weak pull-up of a simulated latch', () => {
    const run = (spec: typeof poles): string[] => {
      const volts = Float64Array.from(voltsOf(spec, 4)[0]!);
      return watchFindings(rigOf('latch'), spec.rateHz, {}, volts).map(({ code }) => code);
    };
    expect(run(poles)).toEqual([]);
    expect(run(withFaults(poles, { kind: 'weak-pull-up', ohm: 5_000_000 }))).toContain('slow-edge');
  });
});
