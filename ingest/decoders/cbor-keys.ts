/** The keys of a block in CBOR, each as one bit. */
import { CborFault, keyId } from './cbor-values';
import { indefinite } from './cbor-reader';
import type { CborReader } from './cbor-reader';
import { quoted } from './result';

export const hasStream = 1;
export const hasSeq = 2;
export const hasRate = 4;
export const hasTime = 8;
export const hasSamples = 16;
export const hasCodes = 32;

export const keyNames: Record<number, string> = {
  [hasStream]: 'stream',
  [hasSeq]: 'seq',
  [hasRate]: 'rate',
  [hasTime]: 'time',
  [hasSamples]: 'samples',
  [hasCodes]: 'codes',
};

const wordBytes = new Map(
  Object.entries(keyNames).map(([bit, name]) => [
    name.charCodeAt(0) * 256 + name.charCodeAt(1),
    { bit: Number(bit), bytes: Uint8Array.from(name, (c) => c.charCodeAt(0)) },
  ]),
);
/** Words by their first two letters: 'st', 'se', 'ra', 'ti', 'sa', 'co'. */
const wordTable: ({ bit: number; bytes: Uint8Array } | undefined)[] = [];
for (const [prefix, word] of wordBytes) wordTable[hashPrefix(prefix >> 8, prefix & 255)] = word;

function hashPrefix(first: number, second: number): number {
  return ((first & 31) << 5) | (second & 31);
}

/** Reads a key and gives its bit; 0 for one that the format does not know. */
export function readKey(reader: CborReader): number {
  reader.head();
  if (reader.major !== 3) return 0;
  if (reader.arg === indefinite) return 0;
  const length = reader.arg;
  const start = reader.content(length);
  const bytes = reader.bytes;
  if (length < 3 || length > 7) return 0;
  const word = wordTable[hashPrefix(bytes[start]!, bytes[start + 1]!)];
  if (word === undefined || word.bytes.length !== length) return 0;
  for (let i = 0; i < length; i++) if (bytes[start + i] !== word.bytes[i]) return 0;
  return word.bit;
}

/** Passes over a key that is none of ours and tells it apart from others. A known key in chunks is refused. */
export function otherKey(reader: CborReader, at: number): string {
  reader.pos = at;
  reader.skip();
  const end = reader.pos;
  const major = reader.bytes[at]! >> 5;
  if (major !== 0 && major !== 1 && major !== 3) {
    const raw = reader.bytes.subarray(at, end);
    return 'raw' + Buffer.from(raw.buffer, raw.byteOffset, raw.byteLength).toString('latin1');
  }
  reader.pos = at;
  const key = reader.value();
  if (typeof key === 'string' && Object.values(keyNames).includes(key))
    throw new CborFault('invalid', `The key ${quoted(key)} must be written in one piece.`, at);
  return keyId(key);
}
