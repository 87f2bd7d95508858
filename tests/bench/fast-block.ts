/** CBOR blocks whose `seq` and `time` can be written into a copy, so that making load costs little. */
import { normalAt } from '@/simulator/random';

export type BlockTemplate = { bytes: Buffer; seqAt: number; timeAt: number };
export type LoadShape = { channels: string[]; rateHz: number; blockSamples: number };

/** Whole periods of the tone in one block, so that blocks follow each other without a step. */
const periodsPerBlock = 10;

/** B stands a quarter period after A. `variant` gives other noise. */
export function blockTemplate(shape: LoadShape, stream: string, variant: number): BlockTemplate {
  const parts: Buffer[] = [Buffer.of(0xa5), text('stream'), text(stream), text('seq')];
  const seqAt = sizeOf(parts) + 1;
  parts.push(uint32(0), text('rate'), uint32(shape.rateHz), text('time'));
  const timeAt = sizeOf(parts) + 1;
  parts.push(
    Buffer.concat([Buffer.of(0xfb), Buffer.alloc(8)]),
    text('samples'),
    Buffer.of(0xa0 + shape.channels.length),
  );
  shape.channels.forEach((name, c) => {
    const codes = new Int16Array(shape.blockSamples);
    for (let i = 0; i < codes.length; i += 1) {
      const phase = (2 * Math.PI * periodsPerBlock * i) / codes.length - (c * Math.PI) / 2;
      codes[i] = Math.round(2048 + 1200 * Math.sin(phase) + 12 * normalAt(variant * 8 + c, i));
    }
    const length = codes.byteLength;
    // Tag 77 (RFC 8746, sint16, little endian) on a byte string with a two-byte length.
    parts.push(text(name), Buffer.of(0xd8, 77, 0x59, length >> 8, length & 0xff), Buffer.from(codes.buffer));
  });
  return { bytes: Buffer.concat(parts), seqAt, timeAt };
}

export function fill(template: BlockTemplate, seq: number, timeS: number): Buffer {
  const bytes = Buffer.from(template.bytes);
  bytes.writeUInt32BE(seq, template.seqAt);
  bytes.writeDoubleBE(timeS, template.timeAt);
  return bytes;
}

function text(value: string): Buffer {
  const bytes = Buffer.from(value, 'utf8');
  const head = bytes.length < 24 ? Buffer.of(0x60 + bytes.length) : Buffer.of(0x78, bytes.length);
  return Buffer.concat([head, bytes]);
}
function uint32(value: number): Buffer {
  const bytes = Buffer.of(0x1a, 0, 0, 0, 0);
  bytes.writeUInt32BE(value, 1);
  return bytes;
}
function sizeOf(parts: Buffer[]): number {
  return parts.reduce((sum, part) => sum + part.length, 0);
}
