/** The gap opens or the magnets lose strength: less than half of the swing is left, still enough to be counted. */
import type { Fault } from '@/simulator/faults';
import { gapFor, runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';
import { fitted } from '@/tests/accuracy/findings/settings';

export const weakSwing: CaseMaker = (draw) => {
  const variant = draw.pick(['wide gap', 'weak magnets'] as const);
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature', 'three-hall'],
    sensors: ['linear'],
    wheels: variant === 'wide gap' ? ['toothed', 'pole-ring'] : ['toothed', 'pole-ring', 'magnets'],
    missing: [0, 0, 1, 2],
    turnsPerS: [0.5, 40],
    snrDb: [30, 45],
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, easeS: draw.uniform(0.5, 4) });
  const { beginS, endS, wholeS } = timing;
  const span = { beginS, endS, easeS: wholeS - beginS };
  const left = draw.uniform(0.27, 0.42);
  const fault: Fault =
    variant === 'wide gap'
      ? { kind: 'gap', ...span, addMm: gapFor(machine, left) }
      : { kind: 'weak-magnet', ...span, factor: left };
  const motion = runningMotion(draw, machine, timing.seconds);
  return {
    ...benchOf(machine, motion, { faults: [fault], settings: { band: fitted } }),
    ...timing,
    variant,
    consequences: ['offset-drift'],
  };
};
