/**
 * The gap opens, magnets lose strength, a line is loaded: less than half of the swing is left, still enough to count. Or noise
 * hides the teeth from the start, or the filter takes them away at speed.
 */
import type { Fault } from '@/simulator/faults';
import {
  gapFor,
  runningMotion,
  timingFor,
  timingOfStanding,
  type CaseMaker,
  type FaultCase,
} from '@/tests/accuracy/findings/case';
import type { Draw } from '@/tests/accuracy/findings/draw';
import { benchOf, drawMachine, type Machine } from '@/tests/accuracy/findings/machine';
import { passingMotion, steadyMotion } from '@/tests/accuracy/findings/motions';
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
  if (draw.chance(0.3)) return draw.chance(0.5) ? hiddenByNoise(draw) : behindFilter(draw);
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

const soft = {
  sensing: ['single', 'quadrature'],
  sensors: ['linear'],
  wheels: ['toothed', 'pole-ring'],
} as const;

/** As much noise as signal while the stream begins; then it goes. */
function hiddenByNoise(draw: Draw): FaultCase {
  const machine = drawMachine(draw, { ...soft, toothHz: [15, 300], turnsPerS: [0.5, 40], snrDb: [30, 45] });
  const timing = timingOfStanding(machine.turnsPerS, 0);
  const { wholeS, appearS } = timing;
  const endS = wholeS + appearS + draw.uniform(2, 5);
  const goneS = Math.max(7, 6 / machine.turnsPerS);
  const seconds = endS + goneS + 0.5;
  const rmsV = machine.sensor.rmsV / 10 ** (draw.uniform(-2, 4) / 20);
  return {
    ...benchOf(machine, steadyMotion(draw, machine.rpm, seconds), {
      faults: [{ kind: 'noise', beginS: 0, endS, rmsV }],
      settings: { band: fitted, filter: { kind: 'none' }, holdoffS: 0 },
    }),
    ...timing,
    endS,
    goneS,
    seconds,
    variant: 'hidden by noise',
    mayDoubt: true,
    // So much noise comes to the ends of what the converter tells; and without an edge nobody knows that what comes 50 or 60
    // times a second is a tooth.
    consequences: [
      'clipping',
      'mains-hum',
      'slow-edge',
      'offset-drift',
      'dead-channel',
      'direction-flip',
      'illegal-state',
    ],
  };
}

/** A low pass that suits the speed at first, and then no more. */
function behindFilter(draw: Draw): FaultCase {
  const machine = drawMachine(draw, {
    ...soft,
    toothHz: [10, 40],
    turnsPerS: [0.5, 20],
    samplesPerTooth: [200, 300],
    snrDb: [30, 45],
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, easeS: draw.uniform(1, 3) });
  const cutoffHz = machine.toothHz * draw.uniform(2, 3);
  const fastRpm = machine.rpm * draw.uniform(9, 14);
  const motion = passingMotion(draw, machine.rpm, fastRpm, timing);
  const filter = {
    kind: 'lowpass',
    family: 'butterworth',
    order: draw.pick([4, 6, 8] as const),
    cutoffHz,
  } as const;
  return {
    ...benchOf(machine, motion, { settings: { band: fitted, filter, holdoffS: 0 } }),
    ...timing,
    variant: 'behind the filter',
    consequences: ['slow-edge', 'duty-shift', 'offset-drift'],
  };
}
