/** Operate and release point drift, so that the line is high for longer or shorter than it was. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';

export const dutyShift: CaseMaker = (draw) => {
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature', 'three-hall'],
    sensors: ['latch', 'switch'],
    wheels: ['toothed', 'pole-ring'],
    missing: [0, 0, 1],
    turnsPerS: [0.5, 40],
  });
  const { sensor } = machine.sensor;
  if (sensor.kind === 'linear' || sensor.kind === 'pulse')
    throw new Error('a switching sensor was asked for');
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, easeS: draw.uniform(0.5, 5) });
  const { beginS, endS, wholeS } = timing;
  // The duty of a sine against a point c off its middle: 0.5 - asin(c / A) / pi. Both points stay inside the field.
  const half = (machine.field.highMt - machine.field.lowMt) / 2;
  const middle = (sensor.operateMt + sensor.releaseMt) / 2 - machine.sensor.baselineMt;
  const width = (sensor.operateMt - sensor.releaseMt) / 2;
  const off = middle - (machine.field.highMt + machine.field.lowMt) / 2;
  const way = off > 0 ? -1 : 1;
  const most = 0.9 * half - width - way * off;
  const addMt = way * Math.min(most, half * Math.sin(Math.PI * draw.uniform(0.11, 0.18)) + Math.abs(off));
  const channel = machine.still.channels[draw.integer(0, machine.still.channels.length - 1)]!.name;
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults: [{ kind: 'points-drift', channel, beginS, endS, easeS: wholeS - beginS, addMt }],
    }),
    ...timing,
    variant: machine.sensing,
    consequences: ['phase-error', 'illegal-state', 'offset-drift', 'weak-swing'],
  };
};
