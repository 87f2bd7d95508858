/** One block as bytes: CBOR with typed arrays (RFC 8746, by cbor-x) or JSON with plain numbers. */
import { Encoder } from 'cbor-x';
import type { Block } from '@/ingest/block';

export type WireFormat = 'cbor' | 'json';
export type WireBlock = { stream: string; seq: number; samples: number; bytes: Uint8Array };

const encoder = new Encoder({ useRecords: false, mapsAsObjects: true, variableMapSize: true });

export function encodeBlock(block: Block, format: WireFormat): WireBlock {
  const plain = format === 'json';
  const holdsCodes = block.channels.some(({ samples }) => !isFloat(samples));
  const message = {
    stream: block.stream,
    seq: block.seq,
    ...(block.rateHz === undefined ? {} : { rate: block.rateHz }),
    ...(block.timeS === undefined ? {} : { time: block.timeS }),
    ...(plain && holdsCodes ? { codes: true } : {}),
    samples: Object.fromEntries(
      block.channels.map(({ name, samples }) => [name, plain ? Array.from(samples) : samples]),
    ),
  };
  const bytes = plain
    ? new TextEncoder().encode(JSON.stringify(message))
    : Uint8Array.from(encoder.encode(message));
  return { stream: block.stream, seq: block.seq, samples: block.length, bytes };
}

/** Several blocks as one message; a single one stands alone. At most 65,535 blocks. */
export function joinBlocks(blocks: readonly WireBlock[], format: WireFormat): Uint8Array {
  const [only] = blocks;
  if (blocks.length === 1 && only) return only.bytes;
  const parts: Uint8Array[] = [];
  if (format === 'cbor') {
    parts.push(Uint8Array.of(0x99, blocks.length >> 8, blocks.length & 0xff), ...blocks.map((b) => b.bytes));
  } else {
    blocks.forEach((block, i) => parts.push(Uint8Array.of(i === 0 ? 0x5b : 0x2c), block.bytes));
    parts.push(Uint8Array.of(0x5d));
  }
  return Buffer.concat(parts);
}

function isFloat(samples: Block['channels'][number]['samples']): boolean {
  return samples instanceof Float32Array || samples instanceof Float64Array;
}
