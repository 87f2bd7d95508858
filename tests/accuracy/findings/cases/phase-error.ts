/** The second sensor slips from its place: A and B are no longer a quarter apart. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';

export const phaseError: CaseMaker = (draw) => {
  const machine = drawMachine(draw, {
    sensing: ['quadrature'],
    samplesPerTooth: [30, 70],
    turnsPerS: [0.5, 40],
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, easeS: draw.uniform(0, 3) });
  const { beginS, endS, wholeS } = timing;
  const degrees = draw.sign() * draw.uniform(40, 62);
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults: [{ kind: 'phase', channel: 'B', beginS, endS, easeS: wholeS - beginS, degrees }],
    }),
    ...timing,
    variant: machine.sensor.sensor.kind,
    consequences: ['illegal-state'],
  };
};
