import { describe, expect, it } from 'vitest';
import { noChannelEffects } from '@/simulator/fault-effects';
import { createSensor, type SwitchingSensor } from '@/simulator/sensor';

const quiet = { noiseRmsV: 0 };
const none = noChannelEffects();

function outputs(sensor: ReturnType<typeof createSensor>, fields: number[], effects = none): number[] {
  return fields.map((field, i) => sensor.step(field, i, i * 1e-3, 1, effects));
}

describe('linear sensor', () => {
  it('is ratiometric: 25 mV/mT at 5 V gives 3.325 V at 4.75 V and 40 mT', () => {
    const spec = {
      kind: 'linear',
      quiescentV: 2.5,
      sensitivityMvPerMt: 25,
      ratiometric: true,
      lowRailV: 0,
      highRailV: 5,
    };
    const sensor = createSensor({ ...spec, kind: 'linear' }, quiet, 1e-4, 1);
    expect(sensor.step(40, 0, 0, 4.75 / 5, none)).toBeCloseTo(3.325, 9);
  });

  it('follows a step as one pole does, and stops at its rails', () => {
    const sensor = createSensor(
      {
        kind: 'linear',
        quiescentV: 1,
        sensitivityMvPerMt: 10,
        bandwidthHz: 100,
        lowRailV: 0.2,
        highRailV: 1.8,
      },
      quiet,
      1e-3,
      1,
    );
    const [first, second] = outputs(sensor, [0, 50]);
    expect(first).toBe(1);
    expect(second).toBeCloseTo(1 + 0.5 * (1 - Math.exp(-2 * Math.PI * 100 * 1e-3)), 12);
    expect(Math.max(...outputs(sensor, new Array<number>(50).fill(500)))).toBe(1.8);
  });
});

describe('switching sensors', () => {
  const base = { operateMt: 10, releaseMt: 6, pullUpV: 3, pullUpOhm: 1000, lineFarad: 1e-12, lowV: 0 };
  const swing = [0, 8, 12, 8, 4, -8, -12, -8, 0, 12].map((mt) => mt);
  const closed = (spec: SwitchingSensor) =>
    outputs(createSensor(spec, quiet, 1e-3, 1), swing).map((v) => (v < 1.5 ? 1 : 0));

  it('unipolar: one pole only, with hysteresis', () => {
    expect(closed({ kind: 'switch', ...base })).toEqual([0, 0, 1, 1, 0, 0, 0, 0, 0, 1]);
  });
  it('omnipolar: either pole', () => {
    expect(closed({ kind: 'omnipolar', ...base })).toEqual([0, 0, 1, 1, 0, 0, 1, 1, 0, 1]);
  });
  it('latch: holds until the other pole', () => {
    expect(closed({ kind: 'latch', ...base, releaseMt: -10 })).toEqual([0, 0, 1, 1, 1, 1, 0, 0, 0, 1]);
  });

  it('rises through its pull-up: 10 to 90 % in 2.2 R C', () => {
    const stepS = 1e-7;
    const sensor = createSensor(
      { kind: 'switch', ...base, pullUpOhm: 10_000, lineFarad: 1e-9 },
      quiet,
      stepS,
      1,
    );
    outputs(sensor, new Array<number>(100).fill(20));
    const rise = outputs(sensor, new Array<number>(2000).fill(0));
    const at = (volts: number) => rise.findIndex((v) => v >= volts) * stepS;
    expect(at(2.7) - at(0.3)).toBeCloseTo(Math.log(9) * 1e-5, 6);
  });

  it('chatters after an edge while the connector is loose, and not later', () => {
    const sensor = createSensor({ kind: 'switch', ...base }, quiet, 1e-3, 1);
    const fields = [0, ...new Array<number>(200).fill(20)];
    const states = outputs(sensor, fields, { ...none, bounceS: 0.05 }).map((v) => v < 1.5);
    expect(states.slice(1, 50)).toContain(false);
    expect(states.slice(60)).not.toContain(false);
  });
});
