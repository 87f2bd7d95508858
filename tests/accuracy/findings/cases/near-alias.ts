/** The shaft runs so fast that few samples are left for a tooth: from some instant on, or as the stream begins. */
import { timingFor, timingOfStanding, type CaseMaker, type FaultCase } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine, type Machine } from '@/tests/accuracy/findings/machine';
import type { Draw } from '@/tests/accuracy/findings/draw';
import { drawRipple, passingMotion } from '@/tests/accuracy/findings/motions';
import { fitted } from '@/tests/accuracy/findings/settings';

const plain = { filter: { kind: 'none' }, holdoffS: 0 } as const;

export const nearAlias: CaseMaker = (draw) => {
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature'],
    sensors: ['linear', 'latch'],
    toothHz: [30, 300],
    turnsPerS: [0.5, 40],
    snrDb: [30, 45],
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, easeS: draw.uniform(1, 3) });
  const samples = draw.uniform(3.3, 8);
  const fastRpm = (machine.rpm * machine.rateHz) / (samples * machine.toothHz);
  const motion = passingMotion(draw, machine.rpm, fastRpm, timing);
  if (draw.chance(0.25)) return fromTheStart(draw, machine);
  return {
    ...benchOf(machine, motion, { settings: plain }),
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

/** So few that no band is found, and nothing but the raw signal tells; then the shaft slows down. */
function fromTheStart(draw: Draw, machine: Machine): FaultCase {
  const timing = timingOfStanding(machine.turnsPerS, 0);
  const { wholeS, appearS } = timing;
  const changeS = draw.uniform(1, 3);
  const slowS = wholeS + appearS + draw.uniform(1, 4);
  const fastRpm = (machine.rpm * machine.rateHz) / (draw.uniform(2.1, 4.2) * machine.toothHz);
  const endS = slowS + changeS;
  const goneS = Math.max(6, 6 / machine.turnsPerS);
  const motion = {
    startRpm: fastRpm,
    segments: [
      { durationS: slowS, toRpm: fastRpm },
      { durationS: changeS, toRpm: machine.rpm },
      { durationS: goneS + 1, toRpm: machine.rpm },
      { durationS: changeS, toRpm: fastRpm },
    ],
    ripple: drawRipple(draw),
  };
  return {
    ...benchOf(machine, motion, { settings: { ...plain, band: fitted } }),
    ...timing,
    endS,
    goneS,
    seconds: endS + goneS + 0.5,
    variant: 'under 4.3 samples from the start',
    // What is above half the sample rate looks the same, and so does a tone from elsewhere.
    mayDoubt: true,
    consequences: [
      'illegal-state',
      'weak-swing',
      'uneven-teeth',
      'direction-flip',
      'phase-error',
      'duty-shift',
    ],
  };
}
