/**
 * The direction is not the expected one (A and B on each other's input, or a drive that turns the other way: which, the
 * data cannot tell), or it changes at speed, as no shaft can.
 */
import { timingOfStanding, timingFor, runningMotion, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';

export const directionFlip: CaseMaker = (draw) => {
  const variant = draw.pick([
    'swapped from the start',
    'swapped while it stood',
    'drive turned round',
    'swapped at speed',
  ] as const);
  // A slow shaft can turn round between two teeth.
  const isFast = variant === 'swapped at speed';
  const machine = drawMachine(draw, {
    sensing: ['quadrature'],
    toothHz: isFast ? [60, 300] : [10, 300],
    turnsPerS: isFast ? [5, 40] : [0.5, 40],
  });
  const expected = { expectedDirection: 'forward' } as const;
  const swapped = { kind: 'swapped-channels', channels: ['A', 'B'] as [string, string] } as const;
  if (variant === 'swapped from the start') {
    const timing = timingOfStanding(machine.turnsPerS, 3);
    return {
      ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
        faults: [{ ...swapped, beginS: 0, endS: Infinity }],
        setup: expected,
      }),
      ...timing,
      variant,
      mayDoubt: true,
      consequences: [],
    };
  }
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, leadTurns: 4 });
  if (variant === 'swapped at speed') {
    const { beginS, endS } = timing;
    return {
      ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
        faults: [{ ...swapped, beginS, endS }],
      }),
      ...timing,
      variant,
      consequences: ['illegal-state'],
    };
  }
  const standS = draw.uniform(1, 2);
  const rampS = draw.uniform(0.5, 1.5);
  const way = variant === 'drive turned round' ? -1 : 1;
  const beginS = timing.beginS + 2 * rampS + standS;
  // Up to speed again, and as long as it takes.
  const wholeS = beginS + rampS;
  const endS = wholeS + timing.appearS + 3 + rampS + standS;
  const rpm = machine.rpm;
  // The shaft has to be at speed again before the direction can be told.
  const goneS = timing.goneS + rampS + 2 / machine.turnsPerS;
  const motion = {
    startRpm: rpm,
    segments: [
      { durationS: timing.beginS + rampS, toRpm: rpm },
      { durationS: rampS, toRpm: 0 },
      { durationS: standS, toRpm: 0 },
      { durationS: rampS, toRpm: way * rpm },
      { durationS: timing.appearS + 3, toRpm: way * rpm },
      { durationS: rampS, toRpm: 0 },
      { durationS: standS, toRpm: 0 },
      { durationS: rampS, toRpm: rpm },
      { durationS: goneS + 3, toRpm: rpm },
    ],
  };
  const swap = { ...swapped, beginS: beginS - standS / 2, endS: endS - standS / 2 };
  return {
    ...benchOf(machine, motion, { faults: way > 0 ? [swap] : [], setup: expected }),
    ...timing,
    beginS: swap.beginS,
    wholeS,
    endS,
    goneS,
    seconds: endS + goneS + 0.5,
    variant,
    mayDoubt: true,
    consequences: [],
  };
};
