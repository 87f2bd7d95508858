import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { defaultSettings } from '@/signal/model';
import type { Band, Filter, RigSetup, SampleArray, Settings, WidthClass } from '@/signal/model';
import { createPipeline } from '@/signal/pipeline';
import type { PipelineOptions, SetupIssue } from '@/signal/pipeline-types';
import { testChannel, testRig } from '@/signal/test-signals';
import { validateSetup } from '@/signal/validate-setup';

const rateHz = 10_000;

function issueOf(
  rig: RigSetup,
  settings: Partial<Settings> = {},
  more: Partial<PipelineOptions> = {},
): [SetupIssue['code'], string] | null {
  const made = createPipeline({
    rig,
    settings: { ...defaultSettings, ...settings },
    rateHz,
    channels: rig.channels.map(({ name }) => name),
    startIndex: 0,
    ...more,
  });
  if (made.ok) return null;
  expect(made.issue.detail).toMatch(/^[A-Z0-9-].*\.$/);
  return [made.issue.code, made.issue.pointer];
}

const single = testRig('single', 24);
const withWheel = (rig: RigSetup, wheel: Partial<RigSetup['wheel']>): RigSetup => ({
  ...rig,
  wheel: { ...rig.wheel, ...wheel },
});
const withChannel = (more: Partial<RigSetup['channels'][number]>): RigSetup => ({
  ...single,
  channels: [testChannel('A', 'A', more)],
});
const withSensor = (more: object): RigSetup => {
  const { sensor } = testChannel('A', 'A');
  return withChannel({ sensor: { ...sensor, ...more } });
};
const coded = (widthClasses: WidthClass[] | null): RigSetup =>
  withWheel(testRig('width-coded', 24), { widthClasses });

describe('a setup that cannot work', () => {
  it('of wheels', () => {
    expect(issueOf(single)).toBeNull();
    for (const pulsesPerTurn of [0, -1, 1.5, NaN, Infinity])
      expect(issueOf(withWheel(single, { pulsesPerTurn }))).toEqual(['no-pulses', '/wheel/pulsesPerTurn']);
    expect(issueOf(withWheel(single, { pulsesPerTurn: 1e9 }))).toEqual([
      'too-many-pulses',
      '/wheel/pulsesPerTurn',
    ]);
    for (const missingPulses of [24, 25, 23, -1, 0.5, NaN, Infinity])
      expect(issueOf(withWheel(single, { missingPulses }))).toEqual([
        'too-many-missing',
        '/wheel/missingPulses',
      ]);
    expect(issueOf(testRig('single', 4, 1))).toBeNull();
    expect(issueOf(testRig('single', 3, 2))).toEqual(['too-many-missing', '/wheel/missingPulses']);
    expect(issueOf(testRig('three-hall', 60, 2))).toEqual(['gap-not-followed', '/wheel/missingPulses']);
    expect(issueOf(testRig('quadrature', 60, 2))).toBeNull();
    for (const gearRatio of [0, -2, NaN, Infinity, 1e-300, 1e300])
      expect(issueOf(withWheel(single, { gearRatio }))).toEqual(['bad-gear', '/wheel/gearRatio']);
  });

  it('of widths', () => {
    const forward = { widthS: 9e-5, means: 'forward' } as const;
    expect(issueOf(coded([forward, { widthS: 18e-5, means: 'reverse' }]))).toBeNull();
    expect(issueOf(coded(null))).toEqual(['no-widths', '/wheel/widthClasses']);
    expect(issueOf(coded([]))).toEqual(['no-widths', '/wheel/widthClasses']);
    for (const widthS of [0, -1e-4, NaN, Infinity])
      expect(issueOf(coded([forward, { widthS, means: 'weak' }]))).toEqual([
        'bad-widths',
        '/wheel/widthClasses/1/widthS',
      ]);
    expect(issueOf(coded([forward, { widthS: 1e-4, means: 'reverse' }]))).toEqual([
      'bad-widths',
      '/wheel/widthClasses',
    ]);
    // What another arrangement does not use may stand there.
    expect(issueOf(withWheel(single, { widthClasses: [] }))).toBeNull();
  });

  it('of channels', () => {
    const { channels } = testRig('three-hall', 4);
    const hall = testRig('three-hall', 4);
    expect(issueOf(hall, {}, { channels: ['U', 'V'] })).toEqual(['channel-missing', '/channels']);
    expect(issueOf(hall, {}, { channels: ['U', 'V', 'X'] })).toEqual(['channel-missing', '/channels']);
    expect(issueOf({ ...hall, channels: channels.slice(1) })).toEqual(['channel-missing', '/channels']);
    const twoOfOne = { ...single, channels: [testChannel('A', 'A'), testChannel('A2', 'A')] };
    expect(issueOf(twoOfOne)).toEqual(['role-twice', '/channels/1/role']);
    // Only one of them is sent: then it is clear which.
    expect(issueOf(twoOfOne, {}, { channels: ['A2'] })).toBeNull();
    const twoMarks = {
      ...single,
      channels: [testChannel('A', 'A'), testChannel('Z', 'Z'), testChannel('M', 'Z')],
    };
    expect(issueOf(twoMarks)).toEqual(['role-twice', '/channels/2/role']);
    const rides = {
      ...single,
      channels: [testChannel('A', 'A'), testChannel('x', 'aux'), testChannel('y', 'aux')],
    };
    expect(issueOf(rides)).toBeNull();
    expect(issueOf(single, {}, { channels: ['A', 'A'] })).toEqual(['channel-twice', '/channels/0/name']);
    for (const voltsPerCode of [0, NaN, Infinity, 1e200])
      expect(issueOf(withChannel({ voltsPerCode }))).toEqual(['bad-scale', '/channels/0/voltsPerCode']);
    expect(issueOf(withChannel({ voltsPerCode: -0.001 }))).toBeNull();
    for (const codeOffset of [NaN, -Infinity, 1e200])
      expect(issueOf(withChannel({ codeOffset }))).toEqual(['bad-scale', '/channels/0/codeOffset']);
    expect(issueOf(withChannel({ minCode: 0, maxCode: 0 }))).toEqual(['bad-codes', '/channels/0/maxCode']);
    for (const key of ['minCode', 'maxCode', 'maxInputV'])
      expect(issueOf(withChannel({ [key]: NaN }))).toEqual(['bad-number', `/channels/0/${key}`]);
    for (const key of ['supplyV', 'quiescentV', 'sensitivityMvPerMt', 'operateMt', 'releaseMt'])
      expect(issueOf(withSensor({ [key]: Infinity }))).toEqual(['bad-number', `/channels/0/sensor/${key}`]);
    expect(issueOf({ ...single, ratedRpm: NaN })).toEqual(['bad-number', '/ratedRpm']);
  });

  it('of filters', () => {
    const low = (cutoffHz: number): Exclude<Filter, { kind: 'none' | 'bandpass' | 'notch' }> => ({
      kind: 'lowpass',
      family: 'bessel',
      order: 4,
      cutoffHz,
    });
    for (const cutoffHz of [5000, 5001, 1e9])
      expect(issueOf(single, { filter: low(cutoffHz) })).toEqual([
        'cutoff-above-nyquist',
        '/filter/cutoffHz',
      ]);
    for (const cutoffHz of [0, -5, NaN, Infinity])
      expect(issueOf(single, { filter: [low(100), low(cutoffHz)] })).toEqual([
        'cutoff-not-positive',
        '/filter/1/cutoffHz',
      ]);
    expect(issueOf(single, { filter: low(1e-5) })).toEqual(['bad-filter', '/filter/cutoffHz']);
    expect(
      issueOf(single, { filter: { kind: 'notch', family: 'butterworth', order: 2, lowHz: 50, highHz: NaN } }),
    ).toEqual(['cutoff-not-positive', '/filter/highHz']);
    expect(issueOf(single, { filter: { ...low(10), order: 3 as 4 } })).toEqual([
      'bad-filter',
      '/filter/order',
    ]);
    expect(issueOf(single, { filter: { ...low(10), kind: 'comb' } as unknown as Filter })).toEqual([
      'bad-filter',
      '/filter/kind',
    ]);
    expect(issueOf(single, { filter: Array.from({ length: 17 }, () => low(100)) })).toEqual([
      'bad-filter',
      '/filter',
    ]);
  });

  it('of bands', () => {
    const fixed = (operateV: number, releaseV: number): Partial<Settings> => ({
      band: { mode: 'fixed', operateV, releaseV },
    });
    expect(issueOf(single, fixed(1, 1))).toEqual(['band-inverted', '/band']);
    expect(issueOf(single, fixed(Infinity, 1))).toEqual(['bad-number', '/band/operateV']);
    expect(issueOf(single, fixed(2, NaN))).toEqual(['bad-number', '/band/releaseV']);
    for (const [operateFraction, releaseFraction] of [
      [0.4, 0.6],
      [1, 0.5],
      [0.5, 0],
      [NaN, 0.4],
      [0.6, -Infinity],
    ] as const)
      expect(issueOf(single, { band: { mode: 'fitted', operateFraction, releaseFraction } })).toEqual([
        'band-inverted',
        '/band',
      ]);
    expect(issueOf(single, { band: { ...defaultSettings.band, mode: 'wide' as 'fitted' } as Band })).toEqual([
      'bad-band',
      '/band/mode',
    ]);
  });

  it('of a band where its channel never comes', () => {
    const rig = withChannel({ minCode: 0, maxCode: 3300 });
    const band = (operateV: number, releaseV: number, own = false): Partial<Settings> => ({
      band: own
        ? { mode: 'fixed', operateV: 2, releaseV: 1, channels: { A: { operateV, releaseV } } }
        : { mode: 'fixed', operateV, releaseV },
    });
    expect(issueOf(rig, band(2, 1))).toBeNull();
    expect(issueOf(rig, band(3.4, 1))).toEqual(['band-outside', '/band/operateV']);
    expect(issueOf(rig, band(2, 0))).toEqual(['band-outside', '/band/releaseV']);
    expect(issueOf(rig, band(5, 4, true))).toEqual(['band-outside', '/band/channels/A/operateV']);
    // Behind a high pass the signal swings about 0 V.
    const centred: Filter = { kind: 'highpass', family: 'butterworth', order: 2, cutoffHz: 2 };
    expect(issueOf(rig, { ...band(0.5, -0.5), filter: centred })).toBeNull();
    expect(issueOf(rig, { ...band(0.5, -5), filter: centred })).toEqual(['band-outside', '/band/releaseV']);
    // A channel without known ends may show anything; so may any before a stream has begun.
    expect(issueOf(single, band(50, 40))).toBeNull();
    expect(validateSetup(rig, { ...defaultSettings, ...band(50, 40) }, null, null)).toBeNull();
    // An index or a channel that rides along may have volts of its own.
    const more = { ...rig, channels: [...rig.channels, testChannel('Z', 'Z', { minCode: 0, maxCode: 900 })] };
    expect(issueOf(more, band(2, 1))).toBeNull();
  });

  it('of times and rates', () => {
    for (const rate of [0, 0.99, 1e6 + 1, -1, NaN, Infinity])
      expect(issueOf(single, {}, { rateHz: rate })).toEqual(['bad-rate', '/rateHz']);
    for (const rate of [1, 1e6]) expect(issueOf(single, {}, { rateHz: rate })).toBeNull();
    for (const startIndex of [-1, 0.5, NaN, Infinity])
      expect(issueOf(single, {}, { startIndex })).toEqual(['bad-start', '/startIndex']);
    for (const holdoffS of [-1e-9, NaN, Infinity])
      expect(issueOf(single, { holdoffS })).toEqual(['bad-holdoff', '/holdoffS']);
    const speed = (more: object): Partial<Settings> => ({ speed: { ...defaultSettings.speed, ...more } });
    expect(issueOf(single, speed({ method: 'guess' }))).toEqual(['bad-speed', '/speed/method']);
    for (const bad of [0, -1, NaN, Infinity]) {
      expect(issueOf(single, speed({ windowS: bad }))).toEqual(['bad-speed', '/speed/windowS']);
      expect(issueOf(single, speed({ stoppedAfterS: bad }))).toEqual(['bad-speed', '/speed/stoppedAfterS']);
    }
  });
});

const odd = fc.constantFrom(NaN, Infinity, -Infinity, 0, -0, -1, 1e-300, 1e300, 5e-324, 2 ** 53, 0.5);
const mostly = (sound: fc.Arbitrary<number>): fc.Arbitrary<number> =>
  fc.oneof({ weight: 80, arbitrary: sound }, { weight: 1, arbitrary: odd });
const between = (min: number, max: number): fc.Arbitrary<number> => fc.double({ min, max, noNaN: true });
const orNull = (value: fc.Arbitrary<number>): fc.Arbitrary<number | null> => fc.option(mostly(value));

const anyFilter: fc.Arbitrary<Filter> = fc.oneof(
  fc.constant<Filter>({ kind: 'none' }),
  fc.record({
    kind: fc.constantFrom('lowpass', 'highpass' as const),
    family: fc.constantFrom('butterworth', 'bessel' as const),
    order: fc.constantFrom(2, 4, 6, 8 as const),
    cutoffHz: mostly(between(0.1, 900)),
  }),
  fc.record({
    kind: fc.constantFrom('bandpass', 'notch' as const),
    family: fc.constant('butterworth' as const),
    order: fc.constantFrom(2, 4, 6, 8 as const),
    lowHz: mostly(between(0.1, 100)),
    highHz: mostly(between(50, 2000)),
  }),
);

const anyChannel = (role: RigSetup['channels'][number]['role']) =>
  fc
    .record({
      voltsPerCode: mostly(fc.constantFrom(0.001, -0.002, 1e-6)),
      codeOffset: mostly(between(-4000, 4000)),
      minCode: orNull(between(-5000, 0)),
      maxCode: orNull(between(1, 5000)),
      supplyV: orNull(between(1, 10)),
      sensitivityMvPerMt: orNull(between(-50, 50)),
      kind: fc.constantFrom('linear', 'switch', 'latch', 'omnipolar' as const),
      activeLow: fc.boolean(),
    })
    .map(({ supplyV, sensitivityMvPerMt, kind, activeLow, ...more }) => {
      const { sensor } = testChannel(role, role);
      return testChannel(role, role, {
        ...more,
        sensor: { ...sensor, supplyV, sensitivityMvPerMt, kind, activeLow },
      });
    });

const anyRig: fc.Arbitrary<RigSetup> = fc
  .constantFrom('single', 'quadrature', 'three-hall', 'width-coded' as const)
  .chain((sensing) => {
    const roles = {
      single: ['A'],
      quadrature: ['A', 'B'],
      'three-hall': ['U', 'V', 'W'],
      'width-coded': ['A'],
    } as const;
    return fc.record({
      sensing: fc.constant(sensing),
      wheel: fc.record({
        pulsesPerTurn: mostly(fc.integer({ min: 1, max: 200 })),
        missingPulses: fc.oneof(
          { weight: 4, arbitrary: fc.constant(0) },
          { weight: 1, arbitrary: mostly(fc.nat(3)) },
        ),
        gearRatio: mostly(between(0.01, 100)),
        widthClasses: fc.option(
          fc.array(
            fc.record({
              widthS: mostly(between(1e-6, 0.1)),
              means: fc.constantFrom('forward', 'reverse', 'weak' as const),
            }),
            { maxLength: 3 },
          ),
        ),
      }),
      channels: fc.tuple(...[...roles[sensing], 'Z' as const].map(anyChannel)),
      expectedDirection: fc.constantFrom(null, 'forward', 'reverse' as const),
      ratedRpm: orNull(between(1, 1e5)),
    });
  });

const anySettings: fc.Arbitrary<Settings> = fc.record({
  filter: fc.oneof(anyFilter, fc.array(anyFilter, { maxLength: 3 })),
  band: fc.oneof(
    fc.record({
      mode: fc.constant('fixed' as const),
      operateV: mostly(between(0, 10)),
      releaseV: mostly(between(-10, 0)),
    }),
    fc.record({
      mode: fc.constant('fitted' as const),
      operateFraction: mostly(between(0.5, 0.9)),
      releaseFraction: mostly(between(0.1, 0.5)),
    }),
  ),
  holdoffS: fc.oneof(fc.constant(0), mostly(between(0, 0.1))),
  speed: fc.record({
    method: fc.constantFrom('tooth', 'turn', 'window' as const),
    windowS: mostly(between(0.001, 10)),
    stoppedAfterS: mostly(between(0.01, 10)),
  }),
});

/** Signals that go wrong in ways of their own, at `n` samples. */
const signals: ((n: number) => SampleArray)[] = [
  (n) => new Float64Array(n),
  (n) => new Float64Array(n).fill(1.65),
  (n) => Int16Array.from({ length: n }, (_, i) => (i % 17 < 8 ? 32_767 : -32_768)),
  (n) => Float32Array.from({ length: n }, (_, i) => 1.65 + Math.sin(i / 3.1) + (i % 97 === 0 ? 1e6 : 0)),
  (n) => Float64Array.from({ length: n }, (_, i) => (i < n / 2 ? 0 : 1e12)),
  (n) => Uint8Array.from({ length: n }, (_, i) => (i * i * 31) % 256),
  (n) => Float64Array.from({ length: n }, (_, i) => 1.65 + Math.sin(i / 40) + 0.3 * Math.sin(i * i)),
];

function numbersOf(value: unknown): number[] {
  if (typeof value === 'number') return [value];
  return value !== null && typeof value === 'object' ? Object.values(value).flatMap(numbersOf) : [];
}

describe('any setup', () => {
  it('is an issue or a pipeline, never an exception, and what the pipeline says are numbers', () => {
    let built = 0;
    fc.assert(
      fc.property(
        anyRig,
        anySettings,
        mostly(fc.oneof(fc.integer({ min: 100, max: 20_000 }), fc.constantFrom(1, 2, 1_000_000))),
        mostly(fc.nat(1e9)),
        fc.array(fc.nat(signals.length - 1), { minLength: 4, maxLength: 4 }),
        fc.array(fc.integer({ min: 1, max: 700 }), { minLength: 1, maxLength: 5 }),
        (rig, settings, rate, startIndex, chosen, cuts) => {
          const channels = rig.channels.map(({ name }) => name);
          const made = createPipeline({ rig, settings, rateHz: rate, channels, startIndex });
          if (!made.ok) {
            expect(made.issue.pointer).toMatch(/^\//);
            return;
          }
          built++;
          const arrays = rig.channels.map((_, c) => signals[chosen[c]!]!(1500));
          for (let at = 0, cut = 0; at < 1500; cut++) {
            const size = Math.min(cuts[cut % cuts.length]!, 1500 - at);
            made.value.process(
              arrays.map((array) => array.subarray(at, at + size)),
              size,
            );
            at += size;
            if (cut % 4 === 3) made.value.skip(40, true);
          }
          const { output } = made.value;
          const said = [
            made.value.status(),
            output.closedFindings,
            output.bands,
            output.directions,
            output.gaps,
          ];
          expect(numbersOf(said).filter((number) => !Number.isFinite(number))).toEqual([]);
          const { count, t, rpm, errorRpm } = output.speed;
          for (let i = 0; i < count; i++)
            expect([t[i], rpm[i], errorRpm[i]].some((number) => Math.abs(number!) === Infinity)).toBe(false);
        },
      ),
      { numRuns: 2500, seed: 20 },
    );
    expect(built).toBeGreaterThan(150);
  }, 60_000);
});
