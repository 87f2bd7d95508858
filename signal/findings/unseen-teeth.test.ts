import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import type { Watched } from '@/signal/findings/test-watch';
import type { Filter, RigSetup, Settings } from '@/signal/model';
import { normal, sampled, seeded, testChannel, testPipeline, testRig } from '@/signal/test-signals';

const rateHz = 10_000;
const teeth = 60;

type Case = { noiseV?: number; seconds?: number; rig?: RigSetup; settings?: Partial<Settings> };

/** 1 V either way of 1.65 V, `cyclesAt` teeth up to time t. */
function signalOf(cyclesAt: (t: number) => number, { noiseV = 0.01, seconds = 6 }: Case): Float64Array {
  const noise = normal(seeded(5));
  return sampled(
    seconds * rateHz,
    rateHz,
    (t) => 1.65 + Math.sin(2 * Math.PI * cyclesAt(t) + 0.3) + noiseV * noise(),
  );
}

function found(cyclesAt: (t: number) => number, more: Case = {}): Watched[] {
  const { rig = testRig('single', teeth), settings = {} } = more;
  return watchFindings(rig, rateHz, settings, signalOf(cyclesAt, more));
}

function stateOf(cyclesAt: (t: number) => number, more: Case = {}) {
  const { rig = testRig('single', teeth), settings = {} } = more;
  const volts = signalOf(cyclesAt, more);
  const pipeline = testPipeline(rig, rateHz, settings);
  pipeline.process([volts], volts.length);
  const { state, speedRpm, speedAtMostRpm } = pipeline.status();
  return { state, speedRpm, speedAtMostRpm };
}

const at = (hz: number) => (t: number) => hz * t;
const unknown = { state: 'unknown', speedRpm: null, speedAtMostRpm: null };
const filtered = (filter: Filter): Partial<Settings> => ({ filter });
const lowPass = (cutoffHz: number): Partial<Settings> =>
  filtered({ kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz });

describe('teeth of so few samples that no band is found', () => {
  it.each([2.2, 3, 4])(
    '%s samples a tooth are a fault that cannot be told, and no shaft that stands',
    (few) => {
      const hz = rateHz / few;
      for (const noiseV of [0.003, 0.07]) {
        const [seen, more] = found(at(hz), { noiseV });
        expect(more).toBeUndefined();
        expect(seen).toMatchObject({
          code: 'near-alias',
          severity: 'fault',
          outcome: 'cannot-tell',
          to: null,
        });
        expect(seen!.openedS).toBeLessThan(2);
        expect(seen!.evidence.samplesPerTooth).toBeCloseTo(few, 0);
        expect(seen!.evidence.swingV).toBeGreaterThan(1.6);
        expect(stateOf(at(hz), { noiseV })).toEqual(unknown);
      }
    },
  );

  it('are seen on a switching sensor and on a ring as well', () => {
    const square = sampled(4 * rateHz, rateHz, (t) => ((3333 * t) % 1 < 0.5 ? 3.2 : 0.1));
    const { sensor } = testChannel('A', 'A');
    const rig = testRig('single', teeth, 0, {
      channels: [testChannel('A', 'A', { sensor: { ...sensor, kind: 'switch' } })],
    });
    expect(watchFindings(rig, rateHz, {}, square)).toMatchObject([
      { code: 'near-alias', outcome: 'cannot-tell' },
    ]);
    const [a, b] = [0, 0.25].map((lag) => signalOf((t) => 3333 * t - lag, {}));
    expect(watchFindings(testRig('quadrature', teeth), rateHz, {}, a!, b!)).toMatchObject([
      { code: 'near-alias', outcome: 'cannot-tell' },
    ]);
  });

  it('go once the shaft turns slowly enough', () => {
    const cyclesAt = (t: number) =>
      t < 4 ? 3000 * t : t < 5 ? 12_000 + 300 * (t - 4) : 12_300 + 300 * (t - 5);
    const seen = found(cyclesAt, { seconds: 9 }).filter(({ code }) => code === 'near-alias');
    expect(seen).toHaveLength(1);
    expect(seen[0]!.to).toBeGreaterThan(3);
    expect(seen[0]!.to).toBeLessThan(5);
    expect(stateOf(cyclesAt, { seconds: 9 }).speedRpm).toBeCloseTo(300, 0);
  });
});

describe('teeth that noise hides', () => {
  it.each([
    [1, 300],
    [0.71, 300],
    [0.71, 830],
  ])('noise of %s V on teeth of %i Hz: said that it cannot be told, with what to do', (noiseV, hz) => {
    const seen = found(at(hz), { noiseV }).filter(({ code }) => code === 'weak-swing');
    expect(seen).toMatchObject([{ severity: 'fault', outcome: 'cannot-tell' }]);
    const { openedS, evidence, message } = seen[0]!;
    expect(openedS).toBeLessThan(2);
    expect(evidence.against).toBe('hidden');
    expect(evidence.swingV).toBeCloseTo(2, 0);
    expect(Number(evidence.toneHz)).toBeGreaterThan(0.9 * hz);
    expect(Number(evidence.toneHz)).toBeLessThan(1.1 * hz);
    expect(message).toContain('noise');
    expect(stateOf(at(hz), { noiseV })).toEqual(unknown);
  });

  it('a low pass is named where one would help', () => {
    const [hint] = found(at(80), { noiseV: 0.71 }).filter(({ code }) => code === 'weak-swing');
    expect(hint!.evidence.helpingCutoffHz).toBeCloseTo(160, -1);
    expect(hint!.remedy).toContain('low pass');
    const filter = { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 160 } as const;
    expect(stateOf(at(80), { noiseV: 0.71, settings: filtered(filter) }).speedRpm).toBeCloseTo(80, -1);
  });

  it('edges that are half noise are found as such', () => {
    const seen = found(at(830), { noiseV: 0.28 }).filter(({ code }) => code === 'weak-swing');
    expect(seen).toMatchObject([{ severity: 'fault', outcome: 'found' }]);
    expect(seen[0]!.evidence.against).toBe('noise');
    expect(found(at(830), { noiseV: 0.07 })).toEqual([]);
  });
});

describe('teeth that the filter takes away', () => {
  it.each([
    ['low pass of 60 Hz', lowPass(60)],
    ['high pass of 4000 Hz', filtered({ kind: 'highpass', family: 'butterworth', order: 8, cutoffHz: 4000 })],
    [
      'notch of 290 to 310 Hz',
      filtered({ kind: 'notch', family: 'butterworth', order: 2, lowHz: 290, highHz: 310 }),
    ],
  ])('a %s is named, with what came before it and behind it', (name, settings) => {
    const seen = found(at(300), { noiseV: 0.02, settings });
    expect(seen).toMatchObject([{ code: 'weak-swing', severity: 'fault', outcome: 'found' }]);
    const { evidence, message, openedS } = seen[0]!;
    expect(openedS).toBeLessThan(2);
    expect(evidence).toMatchObject({ against: 'filter', filter: name, counted: 'no' });
    expect(evidence.rawSwingV).toBeCloseTo(2, 1);
    expect(evidence.leftV).toBeLessThan(0.2);
    expect(evidence.toneHz).toBeCloseTo(300, 0);
    expect(message).toContain(name);
    expect(stateOf(at(300), { noiseV: 0.02, settings })).toEqual(unknown);
  });

  it('of two filters it is the one that does it; what is counted right all the same is less grave', () => {
    const two: Filter[] = [
      { kind: 'highpass', family: 'butterworth', order: 2, cutoffHz: 5 },
      { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 100 },
    ];
    const seen = found(at(300), { noiseV: 0.005, settings: { filter: two } });
    expect(seen).toMatchObject([{ code: 'weak-swing', severity: 'warn', outcome: 'found' }]);
    expect(seen[0]!.evidence).toMatchObject({ filter: 'low pass of 100 Hz', counted: 'yes' });
    expect(stateOf(at(300), { noiseV: 0.005, settings: { filter: two } }).speedRpm).toBeCloseTo(300, 0);
  });
});

describe('a swing beside a fixed band', () => {
  const high: Partial<Settings> = { band: { mode: 'fixed', operateV: 3, releaseV: 1.4 } };

  it('without any edge is no shaft that stands; one that counted before may rock', () => {
    expect(stateOf(at(70), { settings: high })).toEqual(unknown);
    expect(found(at(70), { settings: high })).toMatchObject([{ code: 'weak-swing', outcome: 'found' }]);
    const rocks = (t: number) => (t < 2 ? 60 * t : 120 + 0.04 * Math.sin(40 * t));
    const inside: Partial<Settings> = { band: { mode: 'fixed', operateV: 2.3, releaseV: 1.5 } };
    expect(stateOf(rocks, { settings: inside, seconds: 8 }).state).toBe('stopped');
    expect(stateOf(() => 0, { settings: high }).state).toBe('stopped');
  });
});

describe('nothing is said, and a shaft that stands is said to stand', () => {
  const standing = () => 0;
  const highPass = filtered({ kind: 'highpass', family: 'butterworth', order: 2, cutoffHz: 5 });

  it.each([
    ['noise', { noiseV: 0.2 }],
    ['noise behind a low pass', { noiseV: 0.2, settings: lowPass(20) }],
    ['a high pass', { settings: highPass }],
  ])('with %s', (_name, more: Case) => {
    expect(found(standing, { ...more, seconds: 8 })).toEqual([]);
    expect(stateOf(standing, more).state).toBe('stopped');
  });

  it.each([50, 60, 100, 150])('with hum of %i Hz that the filter takes away, or in noise', (hz) => {
    const noise = normal(seeded(6));
    const own = (settings: Partial<Settings>, noiseV: number) => {
      const volts = sampled(
        6 * rateHz,
        rateHz,
        (t) => 1.65 + 0.1 * Math.sin(2 * Math.PI * hz * t) + noiseV * noise(),
      );
      return watchFindings(testRig('single', teeth), rateHz, settings, volts).filter(
        ({ code }) => code === 'weak-swing' || code === 'near-alias',
      );
    };
    expect(own(lowPass(5), 0.003)).toEqual([]);
    expect(own({}, 0.05)).toEqual([]);
  });

  it('without a magnet, quantised, and after a run', () => {
    const noise = normal(seeded(7));
    const codes = Int16Array.from({ length: 8 * rateHz }, (_, i) =>
      Math.round(1650.5 + 0.4 * Math.sin(0.9 * i) + 0.4 * noise()),
    );
    expect(watchFindings(testRig('single', teeth), rateHz, {}, codes)).toEqual([]);
    const stops = (t: number) => 300 * Math.min(t, 3);
    expect(found(stops, { seconds: 8, noiseV: 0.05 })).toEqual([]);
    expect(stateOf(stops, { seconds: 8, noiseV: 0.05 }).state).toBe('stopped');
    expect(found(stops, { seconds: 8, settings: highPass })).toEqual([]);
  });

  it('of a slow start', () => {
    const starts = (t: number) => 10 * t * t;
    expect(found(starts, { seconds: 6 })).toEqual([]);
    expect(found(starts, { seconds: 6, settings: highPass })).toEqual([]);
  });
});

describe('what is told does not depend on how the stream was cut', () => {
  it.each([
    ['too few samples', 3100, 0.01, {}],
    ['noise', 300, 0.8, {}],
    ['half noise', 830, 0.35, {}],
    ['a filter', 300, 0.01, lowPass(80)],
    [
      'a band pass',
      300,
      0.01,
      filtered({ kind: 'bandpass', family: 'butterworth', order: 4, lowHz: 5, highHz: 20 }),
    ],
    ['a hold-off', 300, 0.01, { holdoffS: 0.002 }],
  ])('%s', (_name, hz, noiseV, settings: Partial<Settings>) => {
    const volts = signalOf(at(hz), { noiseV, seconds: 5 });
    const told = [volts.length, 1000, 777, 61].map((block) => {
      const pipeline = testPipeline(testRig('single', teeth), rateHz, settings);
      for (let from = 0; from < volts.length; from += block) {
        const part = volts.subarray(from, from + block);
        pipeline.process([part], part.length);
      }
      const { state, speedRpm, speedAtMostRpm, findings, pulses } = pipeline.status();
      const { directions, closedFindings } = pipeline.output;
      return {
        state,
        speedRpm,
        speedAtMostRpm,
        findings,
        pulses,
        directions: [...directions],
        closed: [...closedFindings],
      };
    });
    expect(told[0]!.findings.length + told[0]!.closed.length).toBeGreaterThan(0);
    for (const one of told) expect(one).toEqual(told[0]);
  });
});
