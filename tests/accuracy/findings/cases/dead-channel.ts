/** A line that says nothing any more: cut, shorted, or without supply. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';

export const deadChannel: CaseMaker = (draw) => {
  const variant = draw.pick(['one of several', 'alone at the rail'] as const);
  const several = variant === 'one of several';
  const machine = drawMachine(draw, {
    sensing: several ? ['quadrature', 'three-hall'] : ['single'],
    ...(several ? {} : { sensors: ['linear'] as const }),
    toothHz: [10, 300],
    turnsPerS: [0.5, 40],
  });
  const { supplyV } = machine.sensor;
  // Twelve edges of the other channel at the speed's lowest; the time until stopped where there is none.
  const needsS = several ? 2 : machine.settings.speed.stoppedAfterS + 2;
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 0, needsS, leadTurns: 5 });
  const { beginS, endS } = timing;
  const channel = machine.still.channels[draw.integer(0, machine.still.channels.length - 1)]!.name;
  const levelV = several ? draw.uniform(0.02, 0.98) * supplyV : draw.pick([0, 0.005, 0.995, 1]) * supplyV;
  const bench = benchOf(machine, runningMotion(draw, machine, timing.seconds), {
    faults: [{ kind: 'dead-channel', channel, beginS, endS, levelV }],
  });
  if (!several)
    bench.spec.channels = bench.spec.channels.map((own) =>
      own.sensor.kind === 'linear'
        ? { ...own, sensor: { ...own.sensor, lowRailV: 0, highRailV: supplyV } }
        : own,
    );
  return {
    ...bench,
    ...timing,
    variant,
    consequences: ['illegal-state', 'direction-flip', 'phase-error', 'weak-swing', 'duty-shift', 'clipping'],
  };
};
