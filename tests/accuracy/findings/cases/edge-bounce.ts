/** One tooth, several edges: a loose contact, a line that rings, a band narrower than the noise. */
import type { Band } from '@/signal/model';
import type { Fault } from '@/simulator/faults';
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine, type Machine, type Wants } from '@/tests/accuracy/findings/machine';
import { fitted } from '@/tests/accuracy/findings/settings';

const switching: Wants = {
  sensing: ['single', 'quadrature'],
  sensors: ['latch', 'switch'],
  toothHz: [5, 150],
  turnsPerS: [0.5, 40],
  samplesPerTooth: [60, 150],
};

export const edgeBounce: CaseMaker = (draw) => {
  const variant = draw.pick(['loose contact', 'ringing', 'narrow band'] as const);
  const machine = drawMachine(
    draw,
    variant === 'narrow band'
      ? {
          ...switching,
          sensors: ['linear'],
          wheels: ['toothed', 'pole-ring'],
          samplesPerTooth: [100, 200],
          snrDb: [32, 42],
        }
      : switching,
  );
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3 });
  const { beginS, endS } = timing;
  const span = { beginS, endS };
  const faults: Fault[] =
    variant === 'loose contact'
      ? [{ kind: 'bounce', ...span, bounceS: draw.uniform(0.08, 0.16) / machine.toothHz }]
      : variant === 'ringing'
        ? [
            {
              kind: 'ringing',
              ...span,
              ...ringFor(machine, draw.uniform(0.05, 0.1)),
              share: draw.uniform(0.9, 1.2),
            },
          ]
        : [
            {
              kind: 'noise',
              ...span,
              rmsV: Math.max(machine.noiseV * draw.uniform(5, 7), leastNoise(machine)),
            },
          ];
  const band: Band =
    variant === 'narrow band' ? narrowBand(machine) : variant === 'ringing' ? halfwayBand(machine) : fitted;
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults,
      settings: { band, holdoffS: 0, filter: { kind: 'none' } },
    }),
    ...timing,
    variant,
    consequences: [
      'slow-edge',
      'extra-pulse',
      'uneven-teeth',
      'wrong-count',
      'near-alias',
      'duty-shift',
      'direction-flip',
      'illegal-state',
    ],
  };
};

/** So slow that each half of its period is sampled a few times, and over before the next edge. */
function ringFor({ toothHz, rateHz }: Machine, share: number): { hz: number; decayS: number } {
  const periodS = Math.max(8 / rateHz, share / toothHz);
  return { hz: 1 / periodS, decayS: 2.5 * periodS };
}

/** Wide enough for the noise as it was, too narrow for what comes. */
function narrowBand({ sensor, noiseV }: Machine): Band {
  const middleV = (sensor.lowV + sensor.highV) / 2;
  return { mode: 'fixed', operateV: middleV + 2.8 * noiseV, releaseV: middleV - 2.8 * noiseV };
}

/** Noise makes a flank bounce where it is larger than what that climbs from one sample to the next: less hardly ever does. */
function leastNoise({ sensor, toothHz, rateHz }: Machine): number {
  return (1.25 * Math.PI * sensor.swingV * toothHz) / rateHz;
}

/** A fitted band would find the ends of the ringing, and stand clear of it. */
function halfwayBand({ sensor }: Machine): Band {
  const at = (share: number) => sensor.lowV + share * (sensor.highV - sensor.lowV);
  return { mode: 'fixed', operateV: at(0.6), releaseV: at(0.4) };
}
