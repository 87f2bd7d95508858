/** The middle of the signal wanders away while the swing stays. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine, rangeOf } from '@/tests/accuracy/findings/machine';
import { fitted } from '@/tests/accuracy/findings/settings';

export const offsetDrift: CaseMaker = (draw) => {
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature'],
    sensors: ['linear'],
    missing: [0, 0, 1],
    turnsPerS: [0.5, 40],
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, easeS: draw.uniform(1, 6) });
  const { beginS, endS, wholeS } = timing;
  const { sensor } = machine;
  const { lowV, highV } = rangeOf(machine);
  const up = highV - sensor.highV > sensor.lowV - lowV;
  const room = 0.8 * (up ? highV - sensor.highV : sensor.lowV - lowV);
  const drift = Math.min(room, draw.uniform(0.18, 0.4) * sensor.swingV);
  const channel = machine.still.channels[0]!.name;
  const fault = { kind: 'offset-drift', channel, beginS, endS, easeS: wholeS - beginS } as const;
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults: [{ ...fault, offsetV: up ? drift : -drift }],
      settings: { band: fitted },
    }),
    ...timing,
    variant: machine.sensing,
    consequences: ['duty-shift', 'phase-error'],
  };
};
