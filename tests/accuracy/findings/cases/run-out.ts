/** The wheel's centre leaves its axis: swing, and where few teeth are, spacing too, go up and down once a turn. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';
import { runOutFor } from '@/tests/accuracy/findings/wheels';

export const runOut: CaseMaker = (draw) => {
  const variant = draw.pick(['swing', 'swing', 'spacing'] as const);
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature'],
    sensors: variant === 'swing' ? ['linear'] : ['latch'],
    wheels: ['toothed', 'pole-ring'],
    missing: variant === 'swing' ? [0, 0, 1] : [0],
    // Of fewer than eight teeth a weak one is as much a wave as an eccentric wheel is.
    positions: variant === 'swing' ? [8, 60] : [8, 14],
    turnsPerS: [1, 40],
    snrDb: [30, 45],
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 6, easeS: draw.uniform(0, 2) });
  const { beginS, endS, wholeS } = timing;
  // A share of the swing; of the spacing it is as many times less as there are teeth.
  const share =
    variant === 'swing'
      ? draw.uniform(0.22, 0.45)
      : draw.uniform(0.018, 0.03) * machine.wheel.wheel.positions;
  const addMm = Math.min(runOutFor(machine.wheel.lengthMm, share), 0.9 * machine.wheel.gapMm);
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults: [{ kind: 'run-out', beginS, endS, easeS: wholeS - beginS, addMm }],
    }),
    ...timing,
    variant,
    // In the spacing alone the wheel and a speed that sways look alike.
    mayDoubt: variant === 'spacing',
    consequences: ['uneven-teeth', 'weak-swing', 'clipping'],
  };
};
