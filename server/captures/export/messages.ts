/** Blocks as CBOR (RFC 8742: one batch after the other) and as JSON (one batch a line). */
import { Encoder, Tag } from 'cbor-x';
import type { CaptureRecord, CaptureStore } from '@/db';
import { holdsCodes } from '@/signal/scale';
import type { Channel, SampleArray } from '@/signal/model';
import { createTurns } from '../turns';
import { exportBlocks } from './blocks';

const encoder = new Encoder({ useRecords: false, variableMapSize: true });

/** RFC 8746, little endian. */
function typedArrayTag(array: SampleArray): number {
  if (array instanceof Uint8Array) return 64;
  if (array instanceof Uint16Array) return 69;
  if (array instanceof Uint32Array) return 70;
  if (array instanceof Int16Array) return 77;
  if (array instanceof Int32Array) return 78;
  return array instanceof Float32Array ? 85 : 86;
}

function tagged(array: SampleArray): Tag {
  return new Tag(Buffer.from(array.buffer, array.byteOffset, array.byteLength), typedArrayTag(array));
}

export async function* cborSequence(store: CaptureStore, capture: CaptureRecord): AsyncGenerator<Uint8Array> {
  for await (const block of exportBlocks(store, capture, (array) => array.BYTES_PER_ELEMENT)) {
    const { stream, seq, rate, time, channels, arrays } = block;
    const samples = Object.fromEntries(channels.map((name, i) => [name, tagged(arrays[i]!)]));
    yield encoder.encode([{ stream, seq, rate, time, samples }]);
  }
}

/** A number in JSON has at most 24 characters, and a comma. */
const jsonNumberBytes = 25;

function volts(array: SampleArray, { voltsPerCode, codeOffset }: Channel): number[] {
  if (!holdsCodes(array)) return Array.from(array);
  return Array.from(array, (code) => (code - codeOffset) * voltsPerCode);
}

/** Codes stay codes; where a block holds both codes and volts, all become volts: `codes` is of the whole block. */
export async function* jsonLines(store: CaptureStore, capture: CaptureRecord): AsyncGenerator<string> {
  const setups = capture.channels.map((name) => capture.rig.channels.find((c) => c.name === name)!);
  const turn = createTurns();
  for await (const block of exportBlocks(store, capture, () => jsonNumberBytes)) {
    const { stream, seq, rate, time, channels, arrays } = block;
    const codes = arrays.every(holdsCodes);
    const samples = Object.fromEntries(
      channels.map((name, i) => [name, codes ? Array.from(arrays[i]!) : volts(arrays[i]!, setups[i]!)]),
    );
    yield `${JSON.stringify([{ stream, seq, rate, time, ...(codes ? { codes } : {}), samples }])}\n`;
    await turn();
  }
}
