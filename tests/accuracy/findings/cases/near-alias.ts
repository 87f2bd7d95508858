/** The shaft runs so fast that few samples are left for a tooth. */
import { timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';
import { drawRipple } from '@/tests/accuracy/findings/motions';

export const nearAlias: CaseMaker = (draw) => {
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature'],
    sensors: ['linear', 'latch'],
    toothHz: [30, 300],
    turnsPerS: [0.5, 40],
    snrDb: [30, 45],
  });
  const changeS = draw.uniform(1, 3);
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, easeS: changeS });
  const { beginS, wholeS, endS, seconds } = timing;
  const samples = draw.uniform(3.3, 8);
  const fastRpm = (machine.rpm * machine.rateHz) / (samples * machine.toothHz);
  const motion = {
    startRpm: machine.rpm,
    segments: [
      { durationS: beginS, toRpm: machine.rpm },
      { durationS: wholeS - beginS, toRpm: fastRpm },
      { durationS: endS - changeS - wholeS, toRpm: fastRpm },
      { durationS: changeS, toRpm: machine.rpm },
      { durationS: seconds, toRpm: machine.rpm },
    ],
    ripple: drawRipple(draw),
  };
  return {
    ...benchOf(machine, motion, { settings: { filter: { kind: 'none' }, holdoffS: 0 } }),
    ...timing,
    variant: samples < 5 ? 'under 5 samples' : 'under 10 samples',
    consequences: [
      'illegal-state',
      'weak-swing',
      'uneven-teeth',
      'missing-tooth',
      'direction-flip',
      'phase-error',
      'duty-shift',
      'run-out',
      'offset-drift',
    ],
  };
};
