/** A pulse too many: a burr at one place, chips that wander, spikes on the wire. */
import type { Fault } from '@/simulator/faults';
import { runningMotion, timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import type { Draw } from '@/tests/accuracy/findings/draw';
import { benchOf, drawMachine, type Machine } from '@/tests/accuracy/findings/machine';

export const extraPulse: CaseMaker = (draw) => {
  const variant = draw.pick(['burr', 'burr', 'chips', 'spikes'] as const);
  const machine = drawMachine(draw, {
    sensing: ['single'],
    sensors: ['linear', 'switch', 'latch'],
    wheels: variant === 'spikes' ? ['toothed', 'pole-ring', 'magnets'] : ['toothed', 'pole-ring'],
    positions: [4, 60],
    turnsPerS: variant === 'chips' ? [2, 30] : [0.5, 30],
    samplesPerTooth: [40, 90],
  });
  const { positions } = machine.wheel.wheel;
  // A chip is counted where it falls between two teeth, clear of both: in a fifth of the turns or so.
  const timing = timingFor(draw, machine.turnsPerS, {
    needsTurns: { burr: 4, chips: 28, spikes: 6 }[variant],
    needsS: variant === 'burr' ? 2 : 3.5,
  });
  const { beginS, endS } = timing;
  const span = { beginS, endS };
  // Teeth and poles stand at half positions, so that a whole one is the middle between two.
  const size = { strength: draw.uniform(0.9, 1.1), width: draw.uniform(0.2, 0.28) };
  const faults: Fault[] =
    variant === 'burr'
      ? [{ kind: 'burr', ...span, at: draw.integer(1, positions - 1), ...size }]
      : variant === 'chips'
        ? [{ kind: 'chips', ...span, share: draw.uniform(0.6, 1), ...size }]
        : [
            {
              kind: 'spikes',
              ...span,
              perS: draw.uniform(2, 6),
              heightV: spikeSign(draw, machine) * machine.sensor.swingV,
              widthS: draw.uniform(0.08, 0.15) / machine.toothHz,
            },
          ];
  return {
    ...benchOf(machine, runningMotion(draw, machine, timing.seconds), {
      faults,
      settings: { holdoffS: 0, filter: { kind: 'none' } },
    }),
    ...timing,
    variant,
    consequences: ['edge-bounce', 'uneven-teeth', 'wrong-count', 'duty-shift'],
  };
};

/** Of narrow pulses the line rests at one end nearly all the time: a spike beyond that end crosses no band. */
function spikeSign(draw: Draw, { wheel, sensor, still }: Machine): number {
  const sign = draw.sign();
  if (wheel.wheel.kind !== 'magnets') return sign;
  // A switching sensor pulls its line down where it sees a magnet.
  const restsHigh = (sensor.sensor.kind !== 'linear') !== (still.channels[0]!.inverted === true);
  return restsHigh ? -1 : 1;
}
