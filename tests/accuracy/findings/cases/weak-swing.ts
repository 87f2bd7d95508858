/** The gap opens, magnets lose strength, a line is loaded: less than half of the swing is left, still enough to count. */
import type { Fault } from '@/simulator/faults';
import { gapFor, runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine, type Machine } from '@/tests/accuracy/findings/machine';
import { fitted } from '@/tests/accuracy/findings/settings';

export const weakSwing: CaseMaker = (draw) => {
  const variant = draw.pick(['wide gap', 'wide gap', 'weak magnets', 'loaded line'] as const);
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature', 'three-hall'],
    sensors: variant === 'loaded line' ? ['latch', 'switch'] : ['linear'],
    wheels: variant === 'wide gap' ? ['toothed', 'pole-ring'] : ['toothed', 'pole-ring', 'magnets'],
    missing: [0, 0, 1, 2],
    turnsPerS: [0.5, 40],
    snrDb: [30, 45],
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, easeS: draw.uniform(0.5, 4) });
  const { beginS, endS, wholeS } = timing;
  const span = { beginS, endS, easeS: wholeS - beginS };
  const left = draw.uniform(0.27, 0.42);
  const fault = faultOf(variant, span, machine, left);
  const motion = runningMotion(draw, machine, timing.seconds);
  return {
    ...benchOf(machine, motion, { faults: [fault], settings: { band: fitted } }),
    ...timing,
    variant,
    consequences: ['offset-drift', 'duty-shift', 'slow-edge'],
  };
};

function faultOf(
  variant: 'wide gap' | 'weak magnets' | 'loaded line',
  span: { beginS: number; endS: number; easeS: number },
  machine: Machine,
  left: number,
): Fault {
  if (variant === 'wide gap') return { kind: 'gap', ...span, addMm: gapFor(machine, left) };
  if (variant === 'weak magnets') return { kind: 'weak-magnet', ...span, factor: left };
  const { sensor } = machine.sensor;
  if (sensor.kind === 'linear' || sensor.kind === 'pulse')
    throw new Error('a switching sensor was asked for');
  const highV = sensor.lowV + left * (sensor.pullUpV - sensor.lowV);
  return { kind: 'weak-pull-up', beginS: span.beginS, endS: span.endS, ohm: sensor.pullUpOhm, highV };
}
