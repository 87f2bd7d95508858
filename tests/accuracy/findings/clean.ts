/** Sound rigs of great variety: whatever is found on one of them is a false alarm. */
import { createDraw, type Draw } from '@/tests/accuracy/findings/draw';
import {
  benchOf,
  drawMachine,
  type Bench,
  type Machine,
  type Wants,
} from '@/tests/accuracy/findings/machine';
import { busyMotion, lengthOf, steadyMotion } from '@/tests/accuracy/findings/motions';

export type Clean = Bench & { seconds: number; kind: string };

/** Mostly slow rigs at modest rates, so that hours of them take minutes; now and then a fast one. */
const kinds: { kind: string; weight: number; wants: Wants; reverses: boolean }[] = [
  { kind: 'single', weight: 26, wants: { sensing: ['single'] }, reverses: true },
  {
    kind: 'wheel with a gap',
    weight: 18,
    wants: { sensing: ['single'], missing: [1, 1, 2] },
    reverses: false,
  },
  { kind: 'quadrature', weight: 22, wants: { sensing: ['quadrature'] }, reverses: true },
  { kind: 'three Hall', weight: 10, wants: { sensing: ['three-hall'] }, reverses: true },
  { kind: 'index', weight: 10, wants: { sensing: ['single', 'quadrature'], index: true }, reverses: false },
  { kind: 'width-coded', weight: 4, wants: { sensing: ['width-coded'], toothHz: [8, 120] }, reverses: true },
  { kind: 'fast', weight: 10, wants: { toothHz: [300, 2000] }, reverses: true },
];

export function makeClean(seed: number): Clean {
  const draw = createDraw(seed);
  const { kind, wants, reverses } = drawKind(draw);
  const isFast = kind === 'fast';
  const machine = drawMachine(draw, {
    toothHz: [8, 160],
    turnsPerS: [0.15, 80],
    snrDb: [25, 50],
    tolerances: { pitchRms: [0.0005, 0.01], strength: 0.04, runOutShare: 0.05 },
    ...wants,
  });
  // The fast ones for less long: they cost more.
  const wantedS = isFast ? draw.uniform(20, 40) : draw.uniform(60, 150);
  const motion = draw.chance(0.2)
    ? steadyMotion(draw, nearMains(draw, machine) ?? machine.rpm, wantedS)
    : busyMotion(draw, machine.rpm, wantedS, { reverses, favourites: favouritesOf(draw, machine) });
  const temperature = {
    percentPerK: draw.pick([-0.04, -0.11, -0.2]),
    swingK: draw.uniform(0, 12),
    periodS: draw.log(100, 1200),
  };
  const bench = benchOf(machine, motion, { spec: draw.chance(0.6) ? { temperature } : {} });
  return { ...bench, seconds: lengthOf(motion), kind };
}

function drawKind(draw: Draw): (typeof kinds)[number] {
  let left = draw.uniform(
    0,
    kinds.reduce((sum, { weight }) => sum + weight, 0),
  );
  return kinds.find(({ weight }) => (left -= weight) < 0) ?? kinds[0]!;
}

/** Speeds at which teeth or turns come with a line of the mains, or just beside it. */
function favouritesOf(draw: Draw, machine: Machine): number[] {
  if (draw.chance(0.5)) return [];
  const near = [1, 2, 3].map(() => nearMains(draw, machine));
  return near.filter((rpm): rpm is number => rpm !== null);
}

function nearMains(draw: Draw, { rpm, toothHz, turnsPerS }: Machine): number | null {
  const lines = [50, 60, 100, 120, 150, 16.7];
  const beside = draw.pick([0, 0, 0.05, 0.3, 1, 3]) * draw.sign();
  const fits = [
    ...lines.map((hz) => (hz + beside) / toothHz),
    ...lines.map((hz) => (hz + beside) / (2 * toothHz)),
    ...lines.map((hz) => (hz + beside) / turnsPerS),
  ].filter((share) => share > 0.2 && share <= 1);
  return fits.length > 0 ? rpm * draw.pick(fits) : null;
}
