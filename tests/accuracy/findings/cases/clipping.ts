/** Peaks cut off at an end: of the converter, or of the sensor's own range. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine, rangeOf } from '@/tests/accuracy/findings/machine';

export const clipping: CaseMaker = (draw) => {
  const variant = draw.pick(['converter', 'volts', 'rail inside the converter'] as const);
  const machine = drawMachine(draw, {
    sensing: ['single', 'quadrature'],
    sensors: ['linear'],
    wheels: ['toothed', 'pole-ring'],
    turnsPerS: [0.5, 40],
    adc: variant === 'volts' ? 'volts' : 'codes',
  });
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3, easeS: draw.uniform(0, 2) });
  const { beginS, endS, wholeS } = timing;
  const { lowV, highV } = rangeOf(machine);
  const room = Math.min(highV - machine.sensor.highV, machine.sensor.lowV - lowV);
  const half = machine.sensor.swingV / 2;
  const factor = draw.uniform(1.2, 1.8) * (1 + room / half);
  const fault = { kind: 'weak-magnet', beginS, endS, easeS: wholeS - beginS, factor } as const;
  const bench = benchOf(machine, runningMotion(draw, machine, timing.seconds), { faults: [fault] });
  // Where it is the converter that cuts, the sensor's own ends are beyond.
  const ends = variant === 'converter' ? { lowRailV: -1, highRailV: machine.sensor.supplyV + 1 } : {};
  bench.spec.channels = bench.spec.channels.map((channel) => {
    const { electronics, sensor } = channel;
    if (sensor.kind !== 'linear') return channel;
    return { ...channel, sensor: { ...sensor, ...ends }, electronics: { ...electronics, humV: 0 } };
  });
  return { ...bench, ...timing, variant, consequences: ['duty-shift', 'offset-drift', 'slow-edge'] };
};
