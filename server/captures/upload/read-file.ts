/** Which format an uploaded file has, and reading it. Its name and its first bytes must agree. */
import { decodeCsvSteps } from '@/ingest/decoders/csv';
import { runInSteps } from '@/ingest/decoders/recording';
import type { RecordingResult } from '@/ingest/decoders/recording';
import { decodeSenmlSteps } from '@/ingest/decoders/senml-recording';
import { readCborFile, readJsonFile } from './messages';
import { maxUploadBytes, refused, unixTimeOf } from './upload';
import type { UploadResult } from './upload';
import { readWav } from './wav';

export type FileKind = 'csv' | 'json' | 'cbor' | 'wav' | 'senml-json' | 'senml-cbor';

const kindsByExtension: Record<string, FileKind> = {
  csv: 'csv',
  txt: 'csv',
  json: 'json',
  jsonl: 'json',
  ndjson: 'json',
  cbor: 'cbor',
  cborseq: 'cbor',
  wav: 'wav',
  senml: 'senml-json',
  senmlc: 'senml-cbor',
};

function startOf(bytes: Uint8Array): 'wav' | 'json' | 'cbor' | 'text' {
  const text = Buffer.from(bytes.buffer, bytes.byteOffset, Math.min(16, bytes.byteLength)).toString('latin1');
  if (text.startsWith('RIFF') && text.slice(8, 12) === 'WAVE') return 'wav';
  const first = bytes.find((byte) => byte > 32) ?? 0;
  if (first === 0x5b || first === 0x7b) return 'json';
  return first >= 0x80 && first <= 0xbf ? 'cbor' : 'text';
}

/** A pack is a list of records; a block has `samples`. Looked at where the name says no more than JSON or CBOR. */
function looksLikeSenml(bytes: Uint8Array): boolean {
  const text = Buffer.from(bytes.buffer, bytes.byteOffset, Math.min(4096, bytes.byteLength)).toString(
    'latin1',
  );
  return /^\s*\[/.test(text) && !text.includes('"samples"') && /"(bn|n|v|bt|bu)"\s*:/.test(text);
}

const wantedStart: Record<FileKind, ReturnType<typeof startOf>> = {
  csv: 'text',
  json: 'json',
  'senml-json': 'json',
  cbor: 'cbor',
  'senml-cbor': 'cbor',
  wav: 'wav',
};

/** undefined: the name and the contents contradict each other, or neither tells. */
function fileKindOf(name: string, bytes: Uint8Array): FileKind | undefined {
  const extension = /\.([a-z0-9]+)$/i.exec(name)?.[1]?.toLowerCase() ?? '';
  const start = startOf(bytes);
  const named = Object.hasOwn(kindsByExtension, extension) ? kindsByExtension[extension] : undefined;
  const kind = named ?? (start === 'text' ? 'csv' : start);
  if (wantedStart[kind] !== start) return undefined;
  return kind === 'json' && looksLikeSenml(bytes) ? 'senml-json' : kind;
}

function ofRecording(result: RecordingResult): UploadResult {
  if (!result.ok) return result;
  const { rateHz, timeS, channels, length, pieces } = result.recording;
  return {
    ok: true,
    upload: {
      rateHz,
      channels,
      stream: 'upload',
      startedAtS: unixTimeOf(timeS),
      gaps: [],
      lengthSamples: length,
      *pieces() {
        let startIndex = 0;
        for (const arrays of pieces) {
          const count = arrays[0]?.length ?? 0;
          yield {
            startIndex,
            count,
            channels: arrays.map((samples, c) => ({ name: channels[c]!, samples })),
          };
          startIndex += count;
        }
      },
    },
  };
}

export async function readFile(
  file: { name: string; bytes: Uint8Array },
  options: { codes: boolean; rigChannels: readonly string[]; nowMs: number },
): Promise<UploadResult> {
  const { name, bytes } = file;
  if (bytes.byteLength === 0) return refused('The file is empty.');
  const kind = fileKindOf(name, bytes);
  if (kind === undefined) return refused('The file is not what its name says, or of no known kind.');
  const pause = () => new Promise<void>((resolve) => setImmediate(resolve));
  const senml = { nowS: options.nowMs / 1000, maxBytes: maxUploadBytes };
  const csv = { codes: options.codes, maxBytes: maxUploadBytes };
  switch (kind) {
    case 'csv':
      return ofRecording(await runInSteps(decodeCsvSteps(bytes, csv), pause));
    case 'senml-json':
      return ofRecording(await runInSteps(decodeSenmlSteps(bytes, { ...senml, format: 'json' }), pause));
    case 'senml-cbor':
      return ofRecording(await runInSteps(decodeSenmlSteps(bytes, { ...senml, format: 'cbor' }), pause));
    case 'cbor':
      return readCborFile(bytes);
    case 'json':
      return readJsonFile(bytes);
    case 'wav':
      return readWav(bytes, options.rigChannels);
  }
}
