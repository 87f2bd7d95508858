/**
 * Demo rig 2: the guide that lays the line on the spool, to and fro. A pole ring of 24 pairs before two linear sensors
 * a quarter of a pair apart. Four minutes a loop; a sensor bracket that slips for a while, a channel that goes dead,
 * and a board that restarts.
 */
import type { ChannelSpec, RigSpec } from '@/simulator/rig-model';
import { setupOf } from '@/simulator/setup';
import type { SettingsBody } from '@/simulator/setup-shape';

function channel(name: string, placeDeg: number, offsetV: number, sensitivityMvPerMt: number): ChannelSpec {
  return {
    name,
    placeDeg,
    sensor: {
      kind: 'linear',
      quiescentV: 2.5 + offsetV,
      sensitivityMvPerMt,
      ratiometric: true,
      bandwidthHz: 20_000,
      lowRailV: 0.2,
      highRailV: 4.75,
    },
    electronics: { noiseRmsV: 0.012, wanderV: 0.02, wanderPeriodS: 300 },
  };
}

/** One pass to the far side and back, `holdS` at each end. */
function pass(rpm: number, runS: number, holdS: number) {
  return [
    { durationS: 2, toRpm: rpm, shape: 'smooth' as const },
    { durationS: runS, toRpm: rpm },
    { durationS: 2, toRpm: 0, shape: 'smooth' as const },
    { durationS: holdS, toRpm: 0 },
    { durationS: 2, toRpm: -rpm, shape: 'smooth' as const },
    { durationS: runS, toRpm: -rpm },
    { durationS: 2, toRpm: 0, shape: 'smooth' as const },
    { durationS: holdS, toRpm: 0 },
  ];
}

const spec: RigSpec = {
  rateHz: 20_000,
  clockPpm: -24,
  motion: {
    startRpm: 0,
    segments: [...pass(240, 22, 1), ...pass(180, 26, 0.6), ...pass(300, 18, 1), ...pass(240, 24, 4)],
    ripple: [{ order: 2, fraction: 0.012 }],
  },
  wheel: {
    kind: 'pole-ring',
    positions: 24,
    pairLengthMm: 6,
    thicknessMm: 2,
    remanenceT: 0.24,
    pitchErrorRms: 0.006,
    runOutMm: 0.03,
  },
  gapMm: 1.1,
  temperature: { percentPerK: -0.2, swingK: 5, periodS: 700 },
  supply: { nominalV: 5 },
  channels: [channel('A', 0, 0.02, 40), channel('B', 93, -0.03, 38.5)],
  adc: { kind: 'codes', bits: 14, voltsPerCode: 5 / 16384, codeOffset: 0 },
  loopS: 225.2,
  faults: [
    { kind: 'phase', beginS: 66, endS: 84, channel: 'B', degrees: 38, easeS: 3 },
    { kind: 'dead-channel', beginS: 128, endS: 133, channel: 'B', levelV: 0.4 },
    { kind: 'restart', beginS: 172, endS: 173.6 },
    { kind: 'lost-blocks', beginS: 205, endS: 205.08 },
  ],
};

const settings: SettingsBody = {
  reason: 'Quiet at the turning points, both channels alike',
  filter: { kind: 'lowpass', family: 'bessel', order: 4, cutoffHz: 1500 },
  band: { mode: 'fitted', operateFraction: 0.6, releaseFraction: 0.4 },
  holdoffS: 0,
  speed: { method: 'tooth', windowS: 0.1, stoppedAfterS: 1 },
};

const name = 'Spool guide';
const words = { name, sensing: 'quadrature', expectedDirection: null, ratedRpm: 320 } as const;
export const spoolGuide = { name, spec, settings, rig: setupOf(spec, words, 5) };
