import { describe, expect, it } from 'vitest';
import { readWav } from './wav';

/** A WAV file of one channel at 1 kHz; type 3 is floats, type 1 integers. */
function wav(tag: 1 | 3, bits: 16 | 32 | 64, samples: number[]): Uint8Array {
  const bytes = Buffer.alloc(44 + (samples.length * bits) / 8);
  bytes.write('RIFF', 0, 'latin1');
  bytes.writeUInt32LE(bytes.length - 8, 4);
  bytes.write('WAVEfmt ', 8, 'latin1');
  bytes.writeUInt32LE(16, 16);
  bytes.writeUInt16LE(tag, 20);
  bytes.writeUInt16LE(1, 22);
  bytes.writeUInt32LE(1000, 24);
  bytes.writeUInt32LE((1000 * bits) / 8, 28);
  bytes.writeUInt16LE(bits / 8, 32);
  bytes.writeUInt16LE(bits, 34);
  bytes.write('data', 36, 'latin1');
  bytes.writeUInt32LE(bytes.length - 44, 40);
  for (const [i, sample] of samples.entries()) {
    const at = 44 + (i * bits) / 8;
    if (tag === 1) bytes.writeInt16LE(sample, at);
    else if (bits === 32) bytes.writeFloatLE(sample, at);
    else bytes.writeDoubleLE(sample, at);
  }
  return bytes;
}

describe('a WAV file', () => {
  it.each([
    [32, NaN, 'is NaN or infinite'],
    [64, Infinity, 'is NaN or infinite'],
    [32, 3e38, 'is beyond 1000000 V'],
    [64, -1.7e308, 'is beyond 1000000 V'],
    [64, 1_000_000.5, 'is beyond 1000000 V'],
  ] as const)('of floats of %d bits is refused for %d V', async (bits, volts, why) => {
    const result = await readWav(wav(3, bits, [0, 1, volts, 2]), ['A']);
    expect(result).toMatchObject({ ok: false, issue: { slug: 'invalid', status: 422 } });
    if (result.ok) return;
    expect(result.issue.detail).toMatch(/^Sample 2 of channel A: /);
    expect(result.issue.detail).toContain(why.replace('is beyond', 'V is beyond'));
  });

  it('of floats gives volts, of integers codes', async () => {
    const floats = await readWav(wav(3, 64, [-1_000_000, 0.25]), ['A']);
    expect(floats.ok && [...floats.upload.pieces()][0]!.channels).toEqual([
      { name: 'A', samples: Float64Array.of(-1_000_000, 0.25) },
    ]);
    const codes = await readWav(wav(1, 16, [-32768, 4095]), ['A']);
    expect(codes.ok && [...codes.upload.pieces()][0]!.channels).toEqual([
      { name: 'A', samples: Int16Array.of(-32768, 4095) },
    ]);
  });
});
