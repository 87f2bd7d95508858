/** The setup says another wheel than the one that turns, or a hold-off eats some of its teeth. */
import type { RigSetup } from '@/signal/model';
import {
  runningMotion,
  timingFor,
  timingOfStanding,
  type CaseMaker,
  type FaultCase,
} from '@/tests/accuracy/findings/case';
import type { Draw } from '@/tests/accuracy/findings/draw';
import { benchOf, drawMachine, type Wants } from '@/tests/accuracy/findings/machine';
import { passingMotion } from '@/tests/accuracy/findings/motions';

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
  if (draw.chance(0.2)) return eatenByHoldoff(draw);
  return {
    ...bench,
    ...timing,
    variant,
    consequences: ['missing-tooth', 'uneven-teeth', 'extra-pulse', 'edge-bounce', 'run-out'],
  };
};

/** A hold-off of a fifth of a tooth, until the shaft turns so fast that it is longer than half of one. */
function eatenByHoldoff(draw: Draw): FaultCase {
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature'],
    sensors: ['linear', 'latch'],
    wheels: ['toothed', 'pole-ring'],
    toothHz: [10, 60],
    turnsPerS: [0.5, 20],
    samplesPerTooth: [160, 240],
    snrDb: [30, 45],
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, easeS: draw.uniform(1, 3) });
  const faster = draw.uniform(4, 12);
  const fastRpm = machine.rpm * faster;
  const motion = passingMotion(draw, machine.rpm, fastRpm, timing);
  return {
    ...benchOf(machine, motion, { settings: { filter: { kind: 'none' }, holdoffS: 0.2 / machine.toothHz } }),
    ...timing,
    variant: 'eaten by the hold-off',
    consequences: [
      'missing-tooth',
      'uneven-teeth',
      'run-out',
      'direction-flip',
      'illegal-state',
      'phase-error',
    ],
  };
}
