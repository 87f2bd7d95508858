/** Splitting a stream into blocks anywhere changes no output, bit for bit. */
import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Filter, RigSetup, SampleArray, Settings } from '@/signal/model';
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
];

const anything = fc.record({
  seed: fc.nat(),
  sensing: fc.constantFrom('single', 'quadrature', 'three-hall' as const),
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

describe('any split gives the same', () => {
  it('edges, speed, direction, band, findings and status', () => {
    fc.assert(
      fc.property(anything, (c) => {
        const rateHz = 4000;
        const rig = testRig(c.sensing, 12, c.sensing === 'single' ? c.missing : 0);
        rig.channels = rig.channels.map(({ name, role }) =>
          testChannel(name, role, { minCode: 0, maxCode: 2400 }),
        );
        const noise = normal(seeded(c.seed));
        const total = c.lengths.reduce((sum, n, k) => sum + n + c.gaps[k]!, 0);
        let at = 0;
        const pieces = c.lengths.map((n, k): Piece => {
          const arrays = rig.channels.map((_, channel) => {
            const shift = c.sensing === 'three-hall' ? channel / 3 : channel / 4;
            const volts = Float64Array.from({ length: n }, (_v, i) => {
              const share = (at + i) / total;
              const moving = c.stops ? Math.min(share, 0.4) : share;
              const t = (moving * total) / rateHz;
              const cycles = c.startHz * t + ((c.endHz - c.startHz) * t * moving) / 2;
              const gone = c.sensing === 'single' && ((Math.floor(cycles) % 12) + 12) % 12 >= 12 - c.missing;
              return (gone ? 0.4 : 1.6 - 1.2 * Math.cos(2 * Math.PI * (cycles - shift))) + c.noiseV * noise();
            });
            if (c.type === 'float64') return volts;
            if (c.type === 'float32') return Float32Array.from(volts);
            return Int16Array.from(volts, (v) => Math.min(2400, Math.max(0, Math.round(v * 1000))));
          });
          at += n + c.gaps[k]!;
          return { arrays, gapAfter: c.gaps[k]! };
        });
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
      { numRuns: 150 },
    );
  }, 120_000);
});
