import { Encoder } from 'cbor-x';
import { describe, expect, it } from 'vitest';
import type { SampleArray } from '@/signal/model';
import { blockLimits } from '../block';
import type { IngestIssue } from '../block';
import { decodeCbor } from './cbor';
import { CborReader } from './cbor-reader';
import { CborFault } from './cbor-values';
import { decodeCsv } from './csv';
import { decodeJson } from './json';
import type { RecordingResult } from './recording';
import type { MessageResult } from './result';
import { decodeSenml } from './senml-recording';

const rounds = 100_000;
const besideRounds = 20_000;
const encoder = new Encoder({ useRecords: false, tagUint8Array: false });

/** Mulberry32: small, seeded, good enough to mutate with. */
function createRandom(seed: number): (below: number) => number {
  let state = seed;
  return (below) => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) % below;
  };
}

/** Heads that claim more than there is, indefinite items, breaks, tags, and signs that mean something in texts. */
const nasty = [
  '9b00000000fffffffe',
  'bbffffffffffffffff',
  '5b00000000fffffffe',
  '7affffffff',
  '9a01312d00',
  '9f',
  'bf',
  '5f',
  '7f',
  'ff',
  'd84d',
  'd855',
  'd856',
  'd828',
  'c2',
  'f97e00',
  'fb7ff0000000000000',
  '81818181818181818181',
  'a0',
  '80',
  'f6',
].map((hex) => Buffer.from(hex, 'hex'));
const nastyTexts = [
  '[',
  ']',
  '{',
  '}',
  '"',
  '\\',
  ',',
  ':',
  '1e999',
  '1e30',
  '-',
  'null',
  '\n',
  '\r',
  '""',
  'NaN',
  '\u2028',
  '__proto__',
].map((text) => Buffer.from(text));

function mutate(seeds: Buffer[], parts: Buffer[], random: (below: number) => number): Buffer {
  let bytes = Buffer.from(seeds[random(seeds.length)]!);
  for (let times = 1 + random(3); times > 0; times--) {
    const at = random(bytes.length + 1);
    switch (random(7)) {
      case 0:
        if (at < bytes.length) bytes[at] = random(256);
        break;
      case 1:
        if (at < bytes.length) bytes[at]! ^= 1 << random(8);
        break;
      case 2:
        bytes = bytes.subarray(0, at);
        break;
      case 3:
        bytes = Buffer.concat([
          bytes.subarray(0, at),
          bytes.subarray(Math.min(bytes.length, at + 1 + random(8))),
        ]);
        break;
      case 4:
        bytes = Buffer.concat([bytes.subarray(0, at), parts[random(parts.length)]!, bytes.subarray(at)]);
        break;
      case 5: {
        const part = parts[random(parts.length)]!;
        bytes = Buffer.concat([
          bytes.subarray(0, at),
          part,
          bytes.subarray(Math.min(bytes.length, at + part.length)),
        ]);
        break;
      }
      default: {
        const other = seeds[random(seeds.length)]!;
        bytes = Buffer.concat([bytes.subarray(0, at), other.subarray(random(other.length))]);
      }
    }
  }
  return bytes;
}

const statuses = { unreadable: 400, invalid: 422, 'too-large': 413 } as Record<IngestIssue['slug'], number>;

function issueFault(issue: IngestIssue): string | undefined {
  if (statuses[issue.slug] !== issue.status) return `${issue.slug} with ${issue.status}`;
  if (issue.detail.length < 10 || issue.detail.length > 300) return `detail: ${issue.detail}`;
  return issue.slug === 'unreadable' && issue.at === undefined ? 'unreadable without where' : undefined;
}

/** Volts within their limit; codes are integers by their kind. */
function areUsable(samples: SampleArray): boolean {
  const areVolts = samples instanceof Float32Array || samples instanceof Float64Array;
  return !areVolts || samples.every((volts: number) => Math.abs(volts) <= blockLimits.maxVolts);
}

function messageFault(result: MessageResult): string | undefined {
  if (!result.ok) return issueFault(result.issue);
  if (result.blocks.length === 0) return 'no block';
  for (const entry of result.blocks) {
    if (!entry.ok) {
      const fault = issueFault(entry.issue);
      if (fault !== undefined) return fault;
      continue;
    }
    const { stream, seq, rateHz, timeS, length, channels } = entry.block;
    if (stream.length < 1 || [...stream].length > 64) return 'stream';
    if (!(Number.isInteger(seq) && seq >= 0 && seq <= blockLimits.maxSeq)) return 'seq';
    if (rateHz !== undefined && !(rateHz >= 1 && rateHz <= 1e6)) return 'rate';
    if (timeS !== undefined && !Number.isFinite(timeS)) return 'time';
    if (!(length >= 1 && length <= 65_536 && channels.length >= 1 && channels.length <= 8)) return 'size';
    if (new Set(channels.map(({ name }) => name)).size !== channels.length) return 'a channel twice';
    for (const { samples } of channels)
      if (samples.length !== length || !areUsable(samples)) return 'samples';
  }
  return undefined;
}

function recordingFault(result: RecordingResult): string | undefined {
  if (!result.ok) return issueFault(result.issue);
  const { rateHz, timeS, channels, length, pieces } = result.recording;
  if (!(rateHz >= 1 && rateHz <= 1e6 && Number.isFinite(timeS))) return 'rate or time';
  if (channels.length < 1 || channels.length > 8 || length < 1) return 'size';
  for (const piece of pieces)
    if (piece.length !== channels.length || piece.some((samples) => !areUsable(samples))) return 'samples';
  return pieces.reduce((sum, piece) => sum + piece[0]!.length, 0) === length ? undefined : 'length';
}

/** Runs all rounds; gives the kinds of outcome that were met. */
function fuzz(
  seed: number,
  seeds: Buffer[],
  parts: Buffer[],
  fault: (bytes: Buffer) => string | undefined,
): void {
  const random = createRandom(seed);
  const memory = (): number => process.memoryUsage().heapUsed + process.memoryUsage().arrayBuffers;
  const before = memory();
  let most = before;
  for (let round = 0; round < rounds; round++) {
    const bytes = mutate(seeds, parts, random);
    let what: string | undefined;
    try {
      what = fault(bytes);
    } catch (error) {
      what = `threw ${String(error)}`;
    }
    if (what !== undefined) expect.fail(`seed ${seed}, round ${round}: ${what}: ${bytes.toString('hex')}`);
    if (round % 1000 === 0) most = Math.max(most, memory());
  }
  expect(most - before).toBeLessThan(400e6);
}

const block = (seq: number, samples: object, fields: object = {}) => ({
  stream: 'boot',
  seq,
  rate: 1000,
  time: 0.5,
  samples,
  ...fields,
});
const typed = {
  A: Int16Array.of(1, -2, 300, 4),
  'B/~': Float32Array.of(0.5, 1.5, 2.5, 3.5),
};
const cborSeeds = [
  block(1, typed),
  block(2, { A: [1, 2.5, -3], B: [0.1, 0.2, 0.3] }, { extra: { deep: [1, [2, { x: 'y' }]] } }),
  block(3, { A: [1, 2, 3] }, { codes: true }),
  [block(4, typed), block(5, { A: Float64Array.of(1.25), B: Uint8Array.of(7) }), block(6, { A: [1] })],
].map((value) => encoder.encode(value));
const jsonSeeds = [
  block(1, { A: [1, 2.5, -3e-2], 'B"\\': [0, 1, 2] }),
  block(2, { A: [1, 2, 3] }, { codes: true, note: 'µ "quoted" {[:,]}' }),
  [block(3, { A: [1] }), block(4, { A: [2] }), block(5, { A: [3] }, { extra: { deep: [1, [2]] } })],
].map((value) => Buffer.from(JSON.stringify(value)));
const csvSeeds = [
  't,A\n0,1\n1,2\n2,3\n',
  't_s,A_V,B_V\r\n0.00,1,2\r\n0.10,3,4\r\n',
  '"time","A"\n"0","1"\n1e0,-2e-1\n',
].map((text) => Buffer.from(text));
const senmlSeeds = [
  '[{"bn":"urn:x:","bt":1e9,"bu":"V","n":"A","v":1},{"n":"A","t":0.1,"v":2},{"n":"A","t":0.2,"v":3}]',
  '[{"bn":"r:","bver":5,"n":"A","v":1},{"n":"B","v":1},{"n":"A","t":1,"v":2},{"n":"B","t":1,"v":2,"s":3}]',
  '[{"n":"A","vs":"text","ut":3},{"n":"open","vb":false},{"n":"d","vd":"aGkgCg"}]',
].map((text) => Buffer.from(text));
const senmlCborSeeds = [
  '83a52162723a221a3b9aca00236156006141020' +
    '1a300614106fb3fb999999999999a0202a300614106fb3fc999999999999a0203',
  '82a32162723a00614102c482200fa3006141060102' + '02',
  '9fa300614102010600a30061410202060' + '1ff',
].map((hex) => Buffer.from(hex, 'hex'));
const senmlNowS = 1_700_000_000;

describe('a hundred thousand mutated messages each: a clear issue or a valid result', () => {
  it('CBOR', () => fuzz(1, cborSeeds, nasty, (bytes) => messageFault(decodeCbor(bytes))), 60_000);
  it('JSON', () => fuzz(2, jsonSeeds, nastyTexts, (bytes) => messageFault(decodeJson(bytes))), 60_000);
  it('CSV', () => fuzz(3, csvSeeds, nastyTexts, (bytes) => recordingFault(decodeCsv(bytes))), 60_000);
  it(
    'SenML JSON',
    () =>
      fuzz(4, senmlSeeds, nastyTexts, (bytes) =>
        recordingFault(decodeSenml(bytes, { format: 'json', nowS: senmlNowS })),
      ),
    60_000,
  );
  it(
    'SenML CBOR',
    () =>
      fuzz(5, senmlCborSeeds, nasty, (bytes) =>
        recordingFault(decodeSenml(bytes, { format: 'cbor', nowS: senmlNowS })),
      ),
    60_000,
  );
});

describe('a good block is not lost because of a bad one beside it', () => {
  const good = block(9, { A: [1, 2, 3] });

  it('CBOR: whatever well-formed item stands between', () => {
    const goodBytes = encoder.encode(good);
    const random = createRandom(6);
    let mixed = 0;
    for (let round = 0; round < besideRounds; round++) {
      const middle = mutate(cborSeeds, nasty, random);
      const result = decodeCbor(Buffer.concat([Buffer.of(0x83), goodBytes, middle, goodBytes]));
      if (!isOneItem(middle)) continue;
      const kept = result.ok && result.blocks.length === 3 && result.blocks[0]!.ok && result.blocks[2]!.ok;
      if (!kept) expect.fail(`round ${round}: ${middle.toString('hex')}`);
      if (!result.blocks[1]!.ok) mixed++;
    }
    expect(mixed).toBeGreaterThan(1000);
  }, 60_000);

  it('JSON: whatever value stands between', () => {
    const random = createRandom(7);
    let mixed = 0;
    for (let round = 0; round < besideRounds; round++) {
      const middle = mutate(jsonSeeds, nastyTexts, random).toString();
      const text = `[${JSON.stringify(good)},${middle},${JSON.stringify(good)}]`;
      const result = decodeJson(Buffer.from(text));
      if (!isJson(middle)) continue;
      const kept = result.ok && result.blocks.length === 3 && result.blocks[0]!.ok && result.blocks[2]!.ok;
      if (!kept) expect.fail(`round ${round}: ${middle}`);
      if (!result.blocks[1]!.ok) mixed++;
    }
    expect(mixed).toBeGreaterThan(1000);
  }, 60_000);
});

function isOneItem(bytes: Buffer): boolean {
  const reader = new CborReader(bytes);
  try {
    reader.skip();
    return reader.pos === reader.end;
  } catch (fault) {
    if (fault instanceof CborFault) return false;
    throw fault;
  }
}

function isJson(text: string): boolean {
  try {
    JSON.parse(text);
    return true;
  } catch {
    return false;
  }
}
