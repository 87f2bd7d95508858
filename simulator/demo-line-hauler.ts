/**
 * Demo rig 1: the drum of a line hauler. A steel wheel of 60 positions, two of them missing, before one linear sensor.
 * Five minutes a loop: mostly healthy; a weak tooth as the bracket breathes, hum from a pump, a few lost blocks,
 * clipping when the drum shaft bows towards the sensor at high speed, and a stop.
 */
import type { RigSpec } from '@/simulator/rig-model';
import { setupOf } from '@/simulator/setup';
import type { SettingsBody } from '@/simulator/setup-shape';

const spec: RigSpec = {
  rateHz: 20_000,
  clockPpm: 18,
  motion: {
    startRpm: 0,
    segments: [
      { durationS: 5, toRpm: 420, shape: 'smooth' },
      { durationS: 30, toRpm: 420 },
      { durationS: 8, toRpm: 600, shape: 'smooth' },
      { durationS: 62, toRpm: 600 },
      { durationS: 10, toRpm: 540, shape: 'smooth' },
      { durationS: 45, toRpm: 540 },
      { durationS: 6, toRpm: 880, shape: 'smooth' },
      { durationS: 34, toRpm: 880 },
      { durationS: 10, toRpm: 500, shape: 'smooth' },
      { durationS: 60, toRpm: 500 },
      { durationS: 9, toRpm: 0, shape: 'smooth' },
      { durationS: 11, toRpm: 0 },
      { durationS: 4, toRpm: 0 },
    ],
    ripple: [
      { order: 1, fraction: 0.006 },
      { order: 3, fraction: 0.011, phaseDeg: 40 },
    ],
  },
  wheel: {
    kind: 'toothed',
    positions: 60,
    missing: [58, 59],
    pitchMm: 6.3,
    modulationMt: 78,
    pitchErrorRms: 0.004,
    strengths: { 17: 0.94, 41: 0.97 },
    runOutMm: 0.04,
  },
  gapMm: 1.25,
  temperature: { percentPerK: -0.11, swingK: 8, periodS: 900 },
  supply: { nominalV: 3.3, rippleV: 0.004, rippleHz: 100 },
  channels: [
    {
      name: 'A',
      placeDeg: 0,
      sensor: {
        kind: 'linear',
        quiescentV: 1.65,
        sensitivityMvPerMt: 45,
        ratiometric: true,
        bandwidthHz: 15_000,
        lowRailV: 0.05,
        highRailV: 3.25,
      },
      electronics: { noiseRmsV: 0.009, humV: 0.002, humHz: 50, wanderV: 0.03, wanderPeriodS: 420 },
    },
  ],
  adc: { kind: 'codes', bits: 12, voltsPerCode: 3.2 / 4096, codeOffset: 0 },
  loopS: 294,
  faults: [
    { kind: 'weak-tooth', beginS: 58, endS: 82, position: 17, strength: 0.42, easeS: 4 },
    { kind: 'gap', beginS: 56, endS: 84, addMm: 0.25, easeS: 8 },
    { kind: 'lost-blocks', beginS: 121, endS: 121.12 },
    { kind: 'hum', beginS: 138, endS: 149, amplitudeV: 0.12, hz: 50 },
    { kind: 'gap', beginS: 172, endS: 193, addMm: -0.95, easeS: 5 },
    { kind: 'lost-blocks', beginS: 236, endS: 236.2 },
  ],
};

const settings: SettingsBody = {
  reason: 'Passes every tooth up to 1,000 rpm and leaves the pump outside',
  filter: { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 3000 },
  band: { mode: 'fitted', operateFraction: 0.6, releaseFraction: 0.4 },
  holdoffS: 0,
  speed: { method: 'turn', windowS: 0.1, stoppedAfterS: 2 },
};

const name = 'Line hauler';
const words = { name, sensing: 'single', expectedDirection: null, ratedRpm: 900 } as const;
export const lineHauler = { name, spec, settings, rig: setupOf(spec, words, 3.3) };
