/** A line of 50 or 60 Hz on the wire, whatever the shaft does. */
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import type { Draw } from '@/tests/accuracy/findings/draw';
import { benchOf, drawMachine, type Machine, type Wants } from '@/tests/accuracy/findings/machine';
import { steadyMotion } from '@/tests/accuracy/findings/motions';

const wants: Wants = {
  sensing: ['single', 'quadrature'],
  sensors: ['linear'],
  toothHz: [10, 300],
  turnsPerS: [0.5, 12],
  snrDb: [28, 45],
};

export const mainsHum: CaseMaker = (draw) => {
  const hz = draw.pick([50, 60]);
  const machine = drawAside(draw, hz);
  const variant = draw.pick(['steady', 'swaying'] as const);
  const timing = timingFor(draw, machine.turnsPerS, { needsTurns: 3 });
  const { beginS, endS } = timing;
  const amplitudeV = (draw.uniform(0.09, 0.2) * machine.sensor.swingV) / 2;
  const motion =
    variant === 'steady'
      ? steadyMotion(draw, machine.rpm, timing.seconds)
      : runningMotion(draw, machine, timing.seconds);
  const fault = { kind: 'hum', beginS, endS, hz, amplitudeV, thirdShare: draw.uniform(0, 0.4) } as const;
  return {
    ...benchOf(machine, motion, { faults: [fault], settings: { filter: { kind: 'none' } } }),
    ...timing,
    variant,
    consequences: ['slow-edge', 'edge-bounce', 'extra-pulse', 'offset-drift', 'duty-shift'],
  };
};

/** Its teeth, and what they repeat each turn, keep away from the line: else the data could not tell one from the other. */
function drawAside(draw: Draw, hz: number): Machine {
  for (;;) {
    const machine = drawMachine(draw, wants);
    const away = (step: number, least: number) => Math.abs(hz / step - Math.round(hz / step)) * step > least;
    // Down to 0.7 of the speed the teeth must not pass the line either.
    const slow = 0.65 * machine.toothHz;
    const passes = [1, 2, 3].some((k) => k * slow < hz + 3 && k * machine.toothHz > hz - 3);
    if (!passes && (machine.turnsPerS < 1 || away(machine.turnsPerS, 0.25))) return machine;
  }
}
