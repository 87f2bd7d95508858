/** One line shows high for low. */
import { runningMotion, timingFor, timingOfStanding, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine, type Machine } from '@/tests/accuracy/findings/machine';
import { fitted } from '@/tests/accuracy/findings/settings';

export const invertedChannel: CaseMaker = (draw) => {
  const variant = draw.pick([
    'one of three Hall lines',
    'one of three Hall lines',
    'one of A and B',
  ] as const);
  const threeHall = variant === 'one of three Hall lines';
  const machine = drawMachine(draw, {
    sensing: threeHall ? ['three-hall'] : ['quadrature'],
    sensors: ['latch', 'linear'],
    turnsPerS: [0.5, 40],
    toothHz: [10, 300],
  });
  const standing = draw.chance(0.5);
  const timing = standing
    ? timingOfStanding(machine.turnsPerS, 3)
    : timingFor(draw, machine.turnsPerS, { needsTurns: 3 });
  const { beginS, endS } = timing;
  const channel = draw.pick(machine.still.channels).name;
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults: [{ kind: 'inverted-line', channel, beginS, endS }],
      // Of two lines only the expected direction tells that one is inverted.
      setup: threeHall ? {} : { expectedDirection: 'forward' },
      settings: comesThrough(machine) ? {} : { band: fitted },
    }),
    ...timing,
    // With even halves an inverted line and two that are swapped look the same.
    ...(threeHall ? {} : { orSaidAs: 'direction-flip', mayDoubt: true }),
    variant: standing ? `${variant}, from the start` : variant,
    consequences: ['illegal-state', 'direction-flip', 'duty-shift', 'phase-error', 'offset-drift'],
  };
};

/** A fixed band that the mirrored swing does not pass makes no edges of that line: it is told as weak, and nothing shows more. */
function comesThrough({ settings: { band }, sensor }: Machine): boolean {
  if (band.mode === 'fitted') return true;
  const { supplyV, lowV, highV } = sensor;
  const clearV = 0.1 * (highV - lowV);
  return supplyV - lowV > band.operateV + clearV && supplyV - highV < band.releaseV - clearV;
}
