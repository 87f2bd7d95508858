import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { newSampleArray, sampleTypes } from '../sample-types';
import type { SampleType } from '../sample-types';
import { fromBytePlanes, toBytePlanes } from './byte-planes';
import { ChunkEncoder, codecs, decodeChunk } from './chunk-codec';
import type { SampleArray } from '@/signal/model';

const hex = (a: SampleArray) => Buffer.from(a.buffer, a.byteOffset, a.byteLength).toString('hex');

function filled(type: SampleType, length: number, value: (i: number) => number): SampleArray {
  const samples = newSampleArray(type, length);
  for (let i = 0; i < length; i++) samples[i] = value(i);
  return samples;
}

describe.each(sampleTypes)('%s', (type) => {
  const size = newSampleArray(type, 1).byteLength;
  const anySamples = fc
    .integer({ min: 1, max: 300 })
    .chain((count) => fc.uint8Array({ minLength: count * size, maxLength: count * size }))
    .map((bytes) => {
      const samples = newSampleArray(type, bytes.length / size);
      new Uint8Array(samples.buffer).set(bytes);
      return samples;
    });

  it('survives the byte planes bit for bit, plain and as differences', () => {
    fc.assert(
      fc.property(anySamples, fc.boolean(), (samples, delta) => {
        const back = fromBytePlanes(toBytePlanes(samples, delta), type, samples.length, delta);
        expect(back.constructor).toBe(samples.constructor);
        expect(hex(back)).toBe(hex(samples));
      }),
      { numRuns: 300 },
    );
  });

  it('survives encoder and decoder bit for bit, chunk after chunk', async () => {
    await fc.assert(
      fc.asyncProperty(fc.array(anySamples, { minLength: 1, maxLength: 4 }), async (chunks) => {
        const encoder = new ChunkEncoder();
        for (const samples of chunks) {
          const encoded = await encoder.encode(samples);
          expect(encoded.data.length).toBeLessThanOrEqual(samples.byteLength + 4);
          expect(hex(await decodeChunk(encoded, type, samples.length))).toBe(hex(samples));
        }
      }),
      { numRuns: 40 },
    );
  });

  it('survives extremes beside one another', async () => {
    const extremes = [
      0,
      1,
      -1,
      127,
      128,
      255,
      256,
      -32_768,
      32_767,
      65_535,
      2 ** 31 - 1,
      -(2 ** 31),
      2 ** 32 - 1,
      1e-300,
      -1e300,
    ];
    const samples = filled(type, 900, (i) => extremes[(i * 7 + (i >> 4)) % extremes.length]!);
    const encoded = await new ChunkEncoder().encode(samples);
    expect(hex(await decodeChunk(encoded, type, 900))).toBe(hex(samples));
  });
});

describe('the encoder', () => {
  const wave = (i: number) => Math.round(1500 * Math.sin(i / 50));

  it('takes differences for a smooth signal and none for a jumping one', async () => {
    expect((await new ChunkEncoder().encode(filled('int16', 20_000, wave))).codec).toBe(codecs.deltaPlanes);
    let seed = 1;
    const jumping = filled('int16', 20_000, () => {
      seed = Math.imul(seed, 1_664_525) + 1_013_904_223;
      return 500 * (seed >>> 29);
    });
    expect((await new ChunkEncoder().encode(jumping)).codec).toBe(codecs.planes);
  });

  it('halves a smooth 16-bit signal at least', async () => {
    const samples = filled('int16', 65_536, wave);
    expect((await new ChunkEncoder().encode(samples)).data.length).toBeLessThan(samples.byteLength / 2);
  });

  it('stores as it is what does not get smaller', async () => {
    const samples = new Uint8Array(4096);
    crypto.getRandomValues(samples);
    expect((await new ChunkEncoder().encode(samples)).codec).toBe(codecs.bytes);
  });
});

describe('damage', () => {
  it('throws instead of giving wrong samples: every single flipped bit', async () => {
    const noise = new Uint8Array(40);
    crypto.getRandomValues(noise);
    for (const samples of [filled('int16', 60, (i) => i * 3), noise]) {
      const encoded = await new ChunkEncoder().encode(samples);
      const type = samples instanceof Uint8Array ? 'uint8' : 'int16';
      for (let bit = 0; bit < 8 * encoded.data.length; bit++) {
        const data = encoded.data.slice();
        data[bit >> 3]! ^= 1 << (bit & 7);
        const outcome = await decodeChunk({ ...encoded, data }, type, samples.length).then(
          hex,
          () => 'refused',
        );
        // A bit that means nothing may flip; what is given back must be right.
        expect(['refused', hex(samples)]).toContain(outcome);
      }
    }
  });

  it('throws for a wrong count, a codec to come and a chunk cut short', async () => {
    const encoded = await new ChunkEncoder().encode(filled('int16', 1000, (i) => i));
    await expect(decodeChunk(encoded, 'int16', 999)).rejects.toThrow();
    await expect(decodeChunk({ ...encoded, codec: 77 }, 'int16', 1000)).rejects.toThrow('codec 77');
    for (const length of [0, 3, 4, 20, encoded.data.length - 1]) {
      const data = encoded.data.subarray(0, length);
      await expect(decodeChunk({ ...encoded, data }, 'int16', 1000)).rejects.toThrow();
      await expect(decodeChunk({ codec: codecs.bytes, data }, 'int16', 1000)).rejects.toThrow();
    }
  });
});
