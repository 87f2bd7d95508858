/** One tooth of the wheel breaks off, or is worn down to a stump. */
import type { Fault } from '@/simulator/faults';
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';

export const missingTooth: CaseMaker = (draw) => {
  const machine = drawMachine(draw, {
    sensing: ['single', 'single', 'quadrature'],
    missing: draw.chance(0.4) ? [1, 2] : [0],
    positions: [6, 60],
    turnsPerS: [0.5, 40],
  });
  const { positions, missing = [] } = machine.wheel.wheel;
  // Not beside the wheel's own gap: there it would be a wider gap.
  const position = draw.integer(2, positions - missing.length - 3);
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 4 });
  const { beginS, endS } = timing;
  const worn = machine.sensor.sensor.kind === 'linear' && draw.chance(0.3);
  const fault: Fault = worn
    ? { kind: 'weak-tooth', beginS, endS, position, strength: draw.uniform(0, 0.08) }
    : { kind: 'missing-tooth', beginS, endS, position };
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), { faults: [fault] }),
    ...timing,
    variant: missing.length > 0 ? 'wheel with a gap' : machine.sensing,
    consequences: ['uneven-teeth', 'wrong-count', 'weak-swing', 'illegal-state', 'run-out'],
  };
};
