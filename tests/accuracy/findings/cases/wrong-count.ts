/** The setup says another wheel than the one that turns. */
import type { RigSetup } from '@/signal/model';
import { runningMotion, timingOfStanding, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine, type Wants } from '@/tests/accuracy/findings/machine';

type Variant =
  'twice, by the index' | 'half, by the index' | 'gap not told' | 'other gap' | 'gap told, not there';

const wants: Record<Variant, Wants> = {
  'twice, by the index': { sensing: ['single', 'quadrature'], index: true, positions: [4, 40] },
  'half, by the index': { sensing: ['single', 'quadrature'], index: true, positions: [4, 40] },
  'gap not told': { sensing: ['single'], missing: [1, 2], positions: [16, 60] },
  'other gap': { sensing: ['single'], missing: [1, 2], positions: [16, 60] },
  'gap told, not there': { sensing: ['single'], missing: [0], wheels: ['toothed'], positions: [16, 60] },
};

export const wrongCount: CaseMaker = (draw) => {
  const variant = draw.pick(Object.keys(wants) as Variant[]);
  const machine = drawMachine(draw, { turnsPerS: [1, 40], ...wants[variant] });
  const { positions, missing = [] } = machine.wheel.wheel;
  const evenly = positions - (positions % 2);
  const told: Partial<RigSetup['wheel']> = {
    'twice, by the index': { pulsesPerTurn: 2 * positions },
    'half, by the index': { pulsesPerTurn: evenly / 2 },
    // A wheel of N positions with M missing told as a plain one of N - M teeth.
    'gap not told': { pulsesPerTurn: positions - missing.length, missingPulses: 0 },
    'other gap': { pulsesPerTurn: positions, missingPulses: missing.length === 1 ? 2 : 1 },
    'gap told, not there': { missingPulses: draw.pick([1, 2]) },
  }[variant];
  const wheel =
    variant === 'half, by the index' ? { ...machine.wheel.wheel, positions: evenly } : machine.wheel.wheel;
  const timing = timingOfStanding(machine.turnsPerS, variant.includes('index') ? 4 : 6);
  const bench = benchOf(machine, runningMotion(draw, machine, timing.seconds), { spec: { wheel } });
  bench.setup.wheel = { ...bench.setup.wheel, ...told };
  return {
    ...bench,
    ...timing,
    variant,
    consequences: ['missing-tooth', 'uneven-teeth', 'extra-pulse', 'edge-bounce', 'run-out'],
  };
};
