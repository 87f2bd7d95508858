/**
 * Demo rig 3: the motor of a rinse pump. Four pole pairs before a latch with an open drain and a long cable. Three
 * minutes a loop; it slows as the strainer clogs, chatters on a loose connector, and is switched off and on.
 */
import type { RigSpec } from '@/simulator/rig-model';
import { setupOf } from '@/simulator/setup';
import type { SettingsBody } from '@/simulator/setup-shape';

const spec: RigSpec = {
  rateHz: 10_000,
  clockPpm: 35,
  motion: {
    startRpm: 0,
    segments: [
      { durationS: 3, toRpm: 1800, shape: 'smooth' },
      { durationS: 40, toRpm: 1800 },
      { durationS: 12, toRpm: 1450 },
      { durationS: 14, toRpm: 1400 },
      { durationS: 2, toRpm: 2400, shape: 'smooth' },
      { durationS: 48, toRpm: 2400 },
      { durationS: 4, toRpm: 1800, shape: 'smooth' },
      { durationS: 42, toRpm: 1800 },
      { durationS: 5, toRpm: 0 },
      { durationS: 8, toRpm: 0 },
    ],
    ripple: [
      { order: 2, fraction: 0.008 },
      { order: 6, fraction: 0.01, phaseDeg: 70 },
    ],
  },
  wheel: {
    kind: 'pole-ring',
    positions: 4,
    pairLengthMm: 18,
    thicknessMm: 3,
    remanenceT: 0.22,
    pitchErrorRms: 0.008,
    runOutMm: 0.1,
  },
  gapMm: 3.5,
  supply: { nominalV: 5 },
  channels: [
    {
      name: 'A',
      placeDeg: 0,
      sensor: {
        kind: 'latch',
        operateMt: 4,
        releaseMt: -4,
        pullUpV: 3.3,
        pullUpOhm: 10_000,
        lineFarad: 4.7e-9,
        lowV: 0.12,
      },
      electronics: { noiseRmsV: 0.01 },
    },
  ],
  adc: { kind: 'codes', bits: 10, voltsPerCode: 3.3 / 1024, codeOffset: 0 },
  loopS: 178,
  faults: [
    { kind: 'bounce', beginS: 84, endS: 91, bounceS: 0.0004 },
    { kind: 'lost-blocks', beginS: 140, endS: 140.3 },
  ],
};

const settings: SettingsBody = {
  reason: 'Half of the supply, wide enough for the cable',
  filter: { kind: 'none' },
  band: { mode: 'fixed', operateV: 2.1, releaseV: 1 },
  holdoffS: 0.0001,
  speed: { method: 'turn', windowS: 0.1, stoppedAfterS: 2 },
};

const name = 'Rinse pump';
const words = { name, sensing: 'single', expectedDirection: null, ratedRpm: 2500 } as const;
export const rinsePump = { name, spec, settings, rig: setupOf(spec, words, 3.3) };
