/** States are skipped that no shaft skips: the input freezes now and then while the shaft turns on. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';

export const illegalState: CaseMaker = (draw) => {
  const machine = drawMachine(draw, {
    sensing: ['quadrature', 'three-hall'],
    toothHz: [10, 300],
    turnsPerS: [0.5, 40],
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 2 });
  const { beginS, endS } = timing;
  const perS = draw.uniform(3, Math.min(8, 0.4 * machine.toothHz));
  // About half a tooth: two states on at once. A little less, and a part of them skips nothing but holds one edge up, which no
  // count and no rule can know; a little more, and a part of them looks like a step back, which the pace betrays.
  const forS = draw.uniform(0.4, 0.6) / machine.toothHz;
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults: [{ kind: 'freeze', beginS, endS, perS, forS }],
    }),
    ...timing,
    variant: machine.sensing,
    consequences: [
      'uneven-teeth',
      'missing-tooth',
      'direction-flip',
      'phase-error',
      'extra-pulse',
      'edge-bounce',
      'duty-shift',
    ],
  };
};
