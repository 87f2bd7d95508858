import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  coarserLevel,
  createColumns,
  createPyramidLevel,
  minMaxColumns,
  minMaxOfLevel,
} from '@/signal/decimate';
import type { SampleArray } from '@/signal/model';

const kinds = [
  Int16Array,
  Uint16Array,
  Uint8Array,
  Int32Array,
  Uint32Array,
  Float32Array,
  Float64Array,
] as const;
const arrays = fc
  .tuple(
    fc.constantFrom(...kinds),
    fc.array(fc.integer({ min: -70_000, max: 70_000 }), { minLength: 1, maxLength: 300 }),
  )
  .map(([Kind, values]): SampleArray => Kind.from(values));

describe('columns', () => {
  it('hold the least and the most of their samples, every sample in one column', () => {
    fc.assert(
      fc.property(arrays, fc.integer({ min: 1, max: 40 }), (samples, wanted) => {
        const count = Math.min(wanted, samples.length);
        const out = createColumns(count);
        minMaxColumns(samples, 0, samples.length, count, out);
        for (let k = 0; k < count; k++) {
          const part = samples.slice(
            Math.floor((k * samples.length) / count),
            Math.floor(((k + 1) * samples.length) / count),
          );
          expect([out.min[k], out.max[k]]).toEqual([Math.min(...part), Math.max(...part)]);
        }
      }),
    );
  });

  it('refuse more columns than samples', () => {
    expect(() => minMaxColumns(Int16Array.of(1, 2), 0, 2, 3, createColumns(3))).toThrow(RangeError);
  });

  it('take the ends of the 16-bit range', () => {
    const out = createColumns(1);
    minMaxColumns(Int16Array.of(32767, -32768, 0), 0, 3, 1, out);
    expect([out.min[0], out.max[0]]).toEqual([-32768, 32767]);
    minMaxColumns(Uint16Array.of(0, 65535), 0, 2, 1, out);
    expect([out.min[0], out.max[0]]).toEqual([0, 65535]);
  });
});

describe('pyramid', () => {
  it('keeps the least and the most on every level, in the type of the samples', () => {
    fc.assert(
      fc.property(arrays, (samples) => {
        const fine = createPyramidLevel(samples, 4);
        const coarse = coarserLevel(fine, 4);
        expect(fine.min.constructor).toBe(samples.constructor);
        expect(fine.min).toHaveLength(Math.ceil(samples.length / 4));
        for (let k = 0; k < coarse.min.length; k++) {
          const part = samples.slice(16 * k, 16 * (k + 1));
          expect([coarse.min[k], coarse.max[k]]).toEqual([Math.min(...part), Math.max(...part)]);
        }
        const out = createColumns(1);
        minMaxOfLevel(fine, 0, fine.min.length, 1, out);
        expect([out.min[0], out.max[0]]).toEqual([Math.min(...samples), Math.max(...samples)]);
      }),
    );
  });
});
