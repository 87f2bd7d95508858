/** Blocks that the board could not send. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';

export const lostSamples: CaseMaker = (draw) => {
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature', 'three-hall'],
    missing: draw.chance(0.3) ? [1, 2] : [0],
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 0, leadTurns: 4 });
  const { beginS } = timing;
  const endS = beginS + draw.log(0.12, 1);
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults: [{ kind: 'lost-blocks', beginS, endS }],
    }),
    ...timing,
    wholeS: endS,
    endS,
    goneS: 8,
    seconds: endS + 9,
    variant: machine.sensing,
    consequences: [],
  };
};
