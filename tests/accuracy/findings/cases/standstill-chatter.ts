/** The shaft stands with a flank under the sensor and shakes, or the noise is wider than the band: teeth are counted. */
import type { Band } from '@/signal/model';
import type { Fault } from '@/simulator/faults';
import { createWheel } from '@/simulator/wheel';
import { timingFor, type CaseMaker } from '@/tests/accuracy/findings/case';
import { benchOf, drawMachine, type Machine } from '@/tests/accuracy/findings/machine';
import { fitted } from '@/tests/accuracy/findings/settings';

export const standstillChatter: CaseMaker = (draw) => {
  const variant = draw.pick(['shaking', 'shaking', 'noise'] as const);
  const machine = drawMachine(draw, {
    sensing: variant === 'noise' ? ['single'] : ['single', 'quadrature'],
    sensors: variant === 'noise' ? ['linear'] : ['linear', 'latch', 'switch'],
    wheels: ['toothed', 'pole-ring'],
    toothHz: [10, 300],
    turnsPerS: [0.5, 40],
    // With less noise the wander of a sound sensor takes the level away from the band, and no edge comes at all.
    snrDb: variant === 'noise' ? [25, 36] : [25, 45],
  });
  const { stoppedAfterS } = machine.settings.speed;
  const timing = timingFor(draw, machine.turnsPerS, {
    needsTurns: 0,
    needsS: 2 + stoppedAfterS,
    leadTurns: 5,
  });
  const rampS = draw.uniform(0.5, 2);
  const beginS = timing.beginS + rampS;
  const wholeS = beginS + 0.2;
  const endS = wholeS + timing.appearS + 3;
  const band = variant === 'noise' ? narrowBand(machine) : fitted;
  const faults: Fault[] = [
    variant === 'noise'
      ? { kind: 'noise', beginS, endS, rmsV: 2.5 * machine.noiseV }
      : {
          kind: 'shake',
          beginS,
          endS,
          amplitudeDeg: draw.uniform(60, 90),
          hz: draw.uniform(3, 12),
          easeS: 0.1,
        },
  ];
  return {
    ...benchOf(machine, standingOnFlank(machine, timing.beginS, rampS, endS), {
      faults,
      settings: { band, holdoffS: 0, filter: { kind: 'none' } },
    }),
    ...timing,
    beginS,
    wholeS,
    endS,
    seconds: endS + timing.goneS + 0.5,
    variant,
    consequences: [
      'slow-edge',
      'edge-bounce',
      'direction-flip',
      'extra-pulse',
      'illegal-state',
      'duty-shift',
      'phase-error',
    ],
  };
};

/** The stop is where tooth 3 or so rises before the first sensor; after the fault the shaft turns on. */
function standingOnFlank(machine: Machine, runS: number, rampS: number, endS: number) {
  const { rpm, gearRatio, wheel, rigSeed } = machine;
  const rise = createWheel(wheel.wheel, rigSeed, wheel.gapMm).riseAt(1) / wheel.wheel.positions;
  const perS = (rpm / 60) * gearRatio;
  // The ramp down adds half of its length at full speed.
  const turns = perS * (runS + rampS / 2);
  const more = (((rise - turns) % 1) + 1) % 1;
  // Spread over the run as a slightly higher speed, so that its length stays.
  const exactRpm = (rpm * (turns + more)) / turns;
  return {
    startRpm: exactRpm,
    segments: [
      { durationS: runS, toRpm: exactRpm },
      { durationS: rampS, toRpm: 0 },
      { durationS: endS - runS - rampS + 0.5, toRpm: 0 },
      { durationS: 1, toRpm: exactRpm },
      { durationS: 60, toRpm: exactRpm },
    ],
  };
}

/** About the level at which the sensor rests: beside it, noise makes an edge now and then, which is no chatter. */
function narrowBand({ sensor, wheel, rigSeed, noiseV }: Machine): Band {
  const { inverted, baselineMt } = sensor;
  if (sensor.sensor.kind !== 'linear') throw new Error('a linear sensor was asked for');
  const built = createWheel(wheel.wheel, rigSeed, wheel.gapMm);
  const fieldMt = built.fieldMt(built.riseAt(1) / wheel.wheel.positions, wheel.gapMm);
  const { quiescentV, sensitivityMvPerMt } = sensor.sensor;
  const levelV = quiescentV + 0.001 * sensitivityMvPerMt * ((inverted ? -fieldMt : fieldMt) + baselineMt);
  return { mode: 'fixed', operateV: levelV + 2.8 * noiseV, releaseV: levelV - 2.8 * noiseV };
}
