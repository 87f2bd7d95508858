/** Plain rigs for the tests of the model: what they are does not matter, what is done to them does. */
import type { Fault } from '@/simulator/faults';
import type { ChannelSpec, RigSpec } from '@/simulator/rig-model';
import { createRig } from '@/simulator/rig-model';
import type { SwitchingSensor } from '@/simulator/sensor';

const always = { beginS: 0, endS: 1e9 };

/** Twelve teeth at 300 rpm (60 teeth a second), one linear sensor: 2.5 V and 1 V either way, without noise. */
export const toothed: RigSpec = {
  rateHz: 10_000,
  motion: { startRpm: 300, segments: [{ durationS: 10, toRpm: 300 }] },
  wheel: { kind: 'toothed', positions: 12, pitchMm: 8, modulationMt: 40 / Math.exp(-Math.PI / 4) },
  gapMm: 1,
  channels: [linear('A')],
  adc: { kind: 'volts' },
  faults: [],
};

export function linear(name: string, more: Partial<ChannelSpec> = {}): ChannelSpec {
  const sensor = {
    kind: 'linear',
    quiescentV: 2.5,
    sensitivityMvPerMt: 25,
    lowRailV: 0,
    highRailV: 5,
  } as const;
  return { name, placeDeg: 0, sensor, electronics: { noiseRmsV: 0 }, ...more };
}

const latch: SwitchingSensor = {
  kind: 'latch',
  operateMt: 5,
  releaseMt: -5,
  pullUpV: 5,
  pullUpOhm: 1000,
  lineFarad: 1e-9,
  lowV: 0,
};

export function switching(name: string, more: Partial<ChannelSpec> = {}): ChannelSpec {
  return { name, placeDeg: 0, sensor: latch, electronics: { noiseRmsV: 0 }, ...more };
}

/** Four pole pairs at 300 rpm (20 a second). */
export const poles: RigSpec = {
  ...toothed,
  wheel: { kind: 'pole-ring', positions: 4, pairLengthMm: 18, thicknessMm: 3, remanenceT: 0.22 },
  gapMm: 3.5,
  channels: [switching('A')],
};

type Loose<F> = F extends Fault ? Omit<F, 'beginS' | 'endS'> : never;

export function withFaults(spec: RigSpec, ...faults: Loose<Fault>[]): RigSpec {
  return { ...spec, faults: faults.map((fault) => ({ ...always, ...fault }) as Fault) };
}

/** Volts of the first channel, or of all. */
export function voltsOf(spec: RigSpec, seconds: number, fromS = 0): number[][] {
  const { rateHz } = spec;
  return createRig(spec, 1)
    .block(Math.round(fromS * rateHz), Math.round(seconds * rateHz))
    .map((array) => Array.from(array));
}

/** Sample numbers at which the signal, with the hysteresis of a comparator, goes up. */
export function risesOf(volts: readonly number[], operateV = 3, releaseV = 2): number[] {
  const out: number[] = [];
  let high = (volts[0] as number) > operateV;
  volts.forEach((v, i) => {
    if (!high && v > operateV) out.push(i);
    high = high ? v >= releaseV : v > operateV;
  });
  return out;
}

export function swingOf(volts: readonly number[]): number {
  return Math.max(...volts) - Math.min(...volts);
}
