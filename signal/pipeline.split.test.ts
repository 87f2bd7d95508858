/** Splitting a stream into blocks anywhere changes no output, bit for bit. */
import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ChannelRole, Filter, RigSetup, SampleArray, Settings, WidthClass } from '@/signal/model';
import { testChannel, testPipeline, testRig, normal, seeded } from '@/signal/test-signals';

type Piece = { arrays: SampleArray[]; gapAfter: number };

function everything(
  rig: RigSetup,
  rateHz: number,
  settings: Partial<Settings>,
  pieces: Piece[],
  cuts: number[],
): unknown {
  const pipeline = testPipeline(rig, rateHz, settings);
  const taken = {
    edges: rig.channels.map((): number[][] => []),
    rejected: rig.channels.map((): number[] => []),
    speed: [] as number[][],
    directions: [] as unknown[],
    bands: [] as unknown[],
    gaps: [] as unknown[],
    closed: [] as unknown[],
  };
  const drain = (): void => {
    const { output } = pipeline;
    output.edges.forEach((columns, c) => {
      for (let i = 0; i < columns.count; i++)
        taken.edges[c]!.push([columns.t[i]!, columns.midT[i]!, columns.flags[i]!]);
    });
    output.rejected.forEach((columns, c) => taken.rejected[c]!.push(...columns.t.subarray(0, columns.count)));
    for (let i = 0; i < output.speed.count; i++) {
      taken.speed.push([output.speed.t[i]!, output.speed.rpm[i]!, output.speed.errorRpm[i]!]);
    }
    taken.directions.push(...output.directions);
    for (const band of output.bands) taken.bands.push(JSON.stringify(band));
    taken.gaps.push(...output.gaps);
    taken.closed.push(...output.closedFindings);
    pipeline.drain();
  };
  let cut = 0;
  for (const { arrays, gapAfter } of pieces) {
    const n = arrays[0]!.length;
    for (let from = 0; from < n;) {
      const size = Math.min(n - from, cuts.length === 0 ? n : cuts[cut++ % cuts.length]!);
      pipeline.process(
        arrays.map((array) => array.subarray(from, from + size)),
        size,
      );
      from += size;
      if (cut % 3 === 0) drain();
    }
    pipeline.skip(gapAfter, false);
  }
  drain();
  // Two channels may report their bands in either order; each channel's own order is fixed.
  taken.bands.sort();
  return { taken, status: pipeline.status() };
}

const filters: Filter[] = [
  { kind: 'none' },
  { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 800 },
  { kind: 'lowpass', family: 'bessel', order: 2, cutoffHz: 300 },
  { kind: 'highpass', family: 'butterworth', order: 6, cutoffHz: 5 },
  { kind: 'bandpass', family: 'butterworth', order: 6, lowHz: 10, highHz: 900 },
  { kind: 'notch', family: 'butterworth', order: 2, lowHz: 48, highHz: 52 },
];

const rateHz = 4000;
const pulsesPerTurn = 12;
const ladder: WidthClass[] = [
  { widthS: 0.001, means: 'weak' },
  { widthS: 0.002, means: 'forward' },
  { widthS: 0.004, means: 'reverse' },
];

const anything = fc.record({
  seed: fc.nat(),
  sensing: fc.constantFrom('single', 'quadrature', 'three-hall', 'width-coded' as const),
  gearRatio: fc.constantFrom(1, 1, 2.5, 0.4),
  /** Channels beside those of the arrangement. */
  beside: fc.subarray<ChannelRole>(['Z', 'aux']),
  sensor: fc.constantFrom('linear', 'linear', 'switch', 'latch', 'omnipolar' as const),
  missing: fc.constantFrom(0, 0, 1, 2),
  type: fc.constantFrom('int16', 'float32', 'float64' as const),
  filter: fc.oneof(
    fc.constantFrom<Filter | Filter[]>(...filters),
    fc.constant<Filter | Filter[]>([filters[3]!, filters[1]!]),
  ),
  fixed: fc.boolean(),
  holdoffS: fc.constantFrom(0, 0, 0.0004, 0.01),
  method: fc.constantFrom('tooth', 'turn', 'window' as const),
  noiseV: fc.constantFrom(0, 0.02, 0.3),
  startHz: fc.double({ min: 0, max: 120, noNaN: true }),
  endHz: fc.double({ min: -120, max: 120, noNaN: true }),
  lengths: fc.array(fc.integer({ min: 1, max: 9000 }), { minLength: 1, maxLength: 3 }),
  gaps: fc.array(fc.integer({ min: 0, max: 5000 }), { minLength: 3, maxLength: 3 }),
  cuts: fc.array(fc.integer({ min: 1, max: 3000 }), { minLength: 1, maxLength: 12 }),
  singly: fc.integer({ min: 0, max: 3 }),
  stops: fc.boolean(),
});

type Case = typeof anything extends fc.Arbitrary<infer T> ? T : never;

function rigOf({ sensing, missing, gearRatio, beside, sensor }: Case): RigSetup {
  const rig = testRig(sensing, pulsesPerTurn, sensing === 'single' ? missing : 0);
  const roles = [...rig.channels.map(({ role }) => role), ...beside];
  return {
    ...rig,
    wheel: { ...rig.wheel, gearRatio, widthClasses: sensing === 'width-coded' ? ladder : null },
    channels: roles.map((role) => {
      const channel = testChannel(role, role, { minCode: 0, maxCode: 2400 });
      const kind = role === 'aux' ? 'linear' : sensor;
      return { ...channel, sensor: { ...channel.sensor, kind } };
    }),
  };
}

/** What a channel shows of a shaft that has turned by so many positions and turns at so many a second, V. */
function lineV(c: Case, role: ChannelRole, lane: number, positions: number, hz: number): number {
  const inTurn = ((positions % pulsesPerTurn) + pulsesPerTurn) % pulsesPerTurn;
  if (role === 'aux') return 1.2;
  if (role === 'Z') return inTurn < 0.4 ? 2.2 : 0.3;
  if (c.sensing === 'width-coded') {
    const widthS = ladder[hz < 0 ? 2 : inTurn < 1 ? 0 : 1]!.widthS;
    return (inTurn % 1) / Math.max(1, Math.abs(hz)) < widthS ? 2.2 : 0.3;
  }
  if (c.sensing === 'single' && inTurn >= pulsesPerTurn - c.missing) return 0.4;
  const shift = c.sensing === 'three-hall' ? lane / 3 : lane / 4;
  const swing = -Math.cos(2 * Math.PI * (positions - shift));
  return c.sensor === 'linear' ? 1.6 + 1.2 * swing : swing > 0 ? 2.3 : 0.2;
}

function piecesOf(c: Case, rig: RigSetup): Piece[] {
  const noise = normal(seeded(c.seed));
  const total = c.lengths.reduce((sum, n, k) => sum + n + c.gaps[k]!, 0);
  let at = 0;
  return c.lengths.map((n, k): Piece => {
    const arrays = rig.channels.map(({ role }, lane) => {
      const volts = Float64Array.from({ length: n }, (_v, i) => {
        const share = (at + i) / total;
        const moving = c.stops ? Math.min(share, 0.4) : share;
        const t = (moving * total) / rateHz;
        const positions = c.startHz * t + ((c.endHz - c.startHz) * t * moving) / 2;
        const hz = c.startHz + (c.endHz - c.startHz) * moving;
        return lineV(c, role, lane, positions, hz) + c.noiseV * noise();
      });
      if (c.type === 'float64') return volts;
      if (c.type === 'float32') return Float32Array.from(volts);
      return Int16Array.from(volts, (v) => Math.min(2400, Math.max(0, Math.round(v * 1000))));
    });
    at += n + c.gaps[k]!;
    return { arrays, gapAfter: c.gaps[k]! };
  });
}

describe('any split gives the same', () => {
  it('edges, speed, direction, band, findings and status', () => {
    fc.assert(
      fc.property(anything, (c) => {
        const rig = rigOf(c);
        const pieces = piecesOf(c, rig);
        const settings: Partial<Settings> = {
          filter: c.filter,
          band: c.fixed
            ? { mode: 'fixed', operateV: 1.8, releaseV: 1.4 }
            : { mode: 'fitted', operateFraction: 0.6, releaseFraction: 0.4 },
          holdoffS: c.holdoffS,
          speed: { method: c.method, windowS: 0.1, stoppedAfterS: 0.3 },
        };
        expect(everything(rig, rateHz, settings, pieces, c.singly === 0 ? [1] : c.cuts)).toEqual(
          everything(rig, rateHz, settings, pieces, []),
        );
      }),
      { numRuns: 200 },
    );
  }, 240_000);

  it('for each of the things that a rig may have', () => {
    // What the random rigs are made of is really drawn, and a rig of it is one that a pipeline takes and sees edges of.
    const sample = fc.sample(anything, { numRuns: 200, seed: 1 });
    const has = (test: (c: Case) => boolean) => sample.filter(test).length;
    for (const sensing of ['single', 'quadrature', 'three-hall', 'width-coded'])
      expect(has((c) => c.sensing === sensing)).toBeGreaterThan(20);
    for (const role of ['Z', 'aux'] as const) expect(has((c) => c.beside.includes(role))).toBeGreaterThan(20);
    expect(has((c) => c.sensor !== 'linear' && c.sensing === 'single')).toBeGreaterThan(5);
    const turning = { ...sample.find((c) => c.sensing === 'width-coded')!, startHz: 50, endHz: 60 } as Case;
    const full = {
      ...turning,
      noiseV: 0,
      stops: false,
      lengths: [8000],
      type: 'float64',
      beside: ['Z', 'aux'],
    };
    const rig = rigOf(full as Case);
    const pipeline = testPipeline(rig, rateHz, {});
    const [{ arrays }] = piecesOf(full as Case, rig) as [Piece];
    pipeline.process(arrays, arrays[0]!.length);
    expect(pipeline.output.edges[0]!.count).toBeGreaterThan(150);
    expect(pipeline.status()).toMatchObject({ direction: 'forward' });
  });
});
