/** The pull-up is far too weak for its cable. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';
import { fitted } from '@/tests/accuracy/findings/settings';

export const slowEdge: CaseMaker = (draw) => {
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature'],
    sensors: ['latch', 'switch'],
    wheels: ['toothed', 'pole-ring'],
    toothHz: [5, 100],
    samplesPerTooth: [100, 220],
    turnsPerS: [0.5, 40],
  });
  const { sensor } = machine.sensor;
  if (sensor.kind === 'linear' || sensor.kind === 'pulse')
    throw new Error('a switching sensor was asked for');
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3 });
  const { beginS, endS } = timing;
  // 10 to 90 % takes 2.2 R C.
  const riseS = draw.uniform(0.16, 0.28) / machine.toothHz;
  const ohm = riseS / (Math.log(9) * sensor.lineFarad);
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults: [{ kind: 'weak-pull-up', beginS, endS, ohm }],
      settings: { band: fitted, filter: { kind: 'none' } },
    }),
    ...timing,
    variant: machine.sensing,
    consequences: ['duty-shift', 'phase-error', 'weak-swing', 'offset-drift'],
  };
};
