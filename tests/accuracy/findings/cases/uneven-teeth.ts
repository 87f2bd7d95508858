/** Teeth off their places: one bent, several, or every second one; from the first turn or from a blow on. */
import type { WheelSpec } from '@/simulator/wheel';
import { runningMotion, timingFor, timingOfStanding, type CaseMaker } from '@/tests/accuracy/findings/case';
import type { Draw } from '@/tests/accuracy/findings/draw';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';

const needsTurns = 22;
/** No tooth jumps: one that did before the sensor would pass it twice. */
const easeS = 0.1;

export const unevenTeeth: CaseMaker = (draw) => {
  const variant = draw.pick(['one bent', 'several', 'every second'] as const);
  const machine = drawMachine(draw, {
    sensing: ['single', 'single', 'quadrature'],
    wheels: ['toothed', 'pole-ring'],
    missing: [0, 0, 1],
    // Several of a few teeth are a wave over the turn, which the shaft may make.
    positions: variant === 'several' ? [18, 60] : [8, 60],
    turnsPerS: [2, 40],
  });
  const { positions, missing = [] } = machine.wheel.wheel;
  const shifts = shiftsOf(draw, variant, positions, missing.length);
  const built = draw.chance(0.4);
  const timing = built
    ? timingOfStanding(machine.turnsPerS, needsTurns)
    : timingFor(draw, machine.turnsPerS, { needsTurns, leadTurns: 30, easeS });
  const { beginS, endS } = timing;
  const wheel: WheelSpec = { ...machine.wheel.wheel, pitchErrors: shifts };
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults: built ? [] : [{ kind: 'uneven-pitch', beginS, endS, easeS, shifts }],
      spec: built ? { wheel } : {},
    }),
    ...timing,
    variant: built ? `${variant}, as built` : variant,
    consequences: ['duty-shift', 'phase-error'],
  };
};

function shiftsOf(
  draw: Draw,
  variant: 'one bent' | 'several' | 'every second',
  positions: number,
  missing: number,
): Record<number, number> {
  const last = positions - missing - 2;
  if (variant === 'one bent') return { [draw.integer(1, last)]: draw.sign() * draw.uniform(0.1, 0.22) };
  const shifts: Record<number, number> = {};
  if (variant === 'several') {
    const count = draw.integer(2, 4);
    for (let i = 0; i < count; i += 1) shifts[draw.integer(1, last)] = draw.sign() * draw.uniform(0.09, 0.18);
    return shifts;
  }
  const shift = draw.sign() * draw.uniform(0.08, 0.15);
  for (let k = 0; k < positions - missing; k += 2) shifts[k] = shift;
  return shifts;
}
