/** The supply of two ratiometric sensors goes up and down, slower than their teeth: both middles follow alike. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine } from '@/tests/accuracy/findings/machine';

export const supplyRipple: CaseMaker = (draw) => {
  const machine = drawMachine(draw, {
    sensing: ['quadrature'],
    sensors: ['linear'],
    wheels: ['toothed', 'pole-ring'],
    toothHz: [40, 300],
    turnsPerS: [0.5, 40],
    snrDb: [30, 45],
  });
  const { sensor, toothHz } = machine;
  const hz = draw.log(1, Math.min(30, toothHz / 8));
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 0, needsS: Math.max(2, 4 / hz) });
  const { beginS, endS } = timing;
  // The quiescent voltage, half of the supply, goes up and down by so large a share of the swing.
  const amplitudeV = draw.uniform(0.12, 0.22) * 2 * sensor.swingV;
  const bench = benchOf(machine, runningMotion(draw, machine, timing.seconds), {
    faults: [{ kind: 'supply-ripple', beginS, endS, hz, amplitudeV }],
    settings: { filter: { kind: 'none' } },
  });
  bench.spec.channels = bench.spec.channels.map((channel) =>
    channel.sensor.kind === 'linear'
      ? { ...channel, sensor: { ...channel.sensor, ratiometric: true } }
      : channel,
  );
  return {
    ...bench,
    ...timing,
    variant: hz < 4 ? 'slow' : 'fast',
    consequences: ['offset-drift', 'duty-shift', 'weak-swing', 'run-out', 'uneven-teeth', 'clipping'],
  };
};
