/** The answer to a CSV or SenML body: read whole, cut into blocks, offered a few at a time. */
import { createHash } from 'node:crypto';
import type { Block, IngestIssue } from '../block';
import type { BlockOutcome } from '../block-sink';
import { decodeCsvSteps } from '../decoders/csv';
import { rateFault, seqFault, streamFault } from '../decoders/fields';
import { cutRecording, runInSteps } from '../decoders/recording';
import type { RecordingResult } from '../decoders/recording';
import { invalid } from '../decoders/result';
import { decodeSenmlSteps } from '../decoders/senml-recording';
import { acceptance, headerOf, refusal, spoolUnavailable } from './http-types';
import type { HttpIngestParts, IngestRequest, IngestResponse } from './http-types';
import { answerReports, reportOf } from './http-message';
import { idempotencyMs } from './idempotency';
import { offerAll } from './offer-all';
import { problemOf } from './problem';

type Format = 'csv' | 'json' | 'cbor';
type Place = { stream: string | undefined; seq: number | undefined; rateHz: number | undefined };
const blocksAtOnce = 8;

export async function answerRecording(
  parts: HttpIngestParts,
  running: Map<string, Promise<unknown>>,
  request: IngestRequest,
  format: Format,
): Promise<IngestResponse> {
  const place = placeOf(request);
  if ('slug' in place) return refusal(problemOf(place));
  const key = format === 'csv' ? undefined : headerOf(request, 'idempotency-key');
  if (key === undefined) return store(parts, request, format, place, parts.nowMs());
  if (key === '' || key.length > 255)
    return refusal(problemOf(invalid('`Idempotency-Key` must have 1 to 255 characters.')));
  const id = JSON.stringify([request.rigId, key]);
  // Of two requests with one key at the same time, the later waits and is then a repeat.
  const before = running.get(id) ?? Promise.resolve();
  const answer = before.then(() => storeOnce(parts, request, format, place, key));
  const settled = answer.then(
    () => undefined,
    () => undefined,
  );
  running.set(id, settled);
  try {
    return await answer;
  } finally {
    if (running.get(id) === settled) running.delete(id);
  }
}

async function storeOnce(
  parts: HttpIngestParts,
  request: IngestRequest,
  format: Format,
  place: Place,
  key: string,
): Promise<IngestResponse> {
  const { idempotency, nowMs } = parts;
  const { rigId, body } = request;
  const digest = createHash('sha256').update(body).digest('hex');
  const found = await idempotency.find(rigId, key);
  const known = found && nowMs() - found.atMs < idempotencyMs ? found : undefined;
  if (known && known.digest !== digest)
    return refusal(problemOf(invalid('This `Idempotency-Key` came before with another body.')));
  if (known?.result) {
    const { seq, samples } = known.result;
    return acceptance({ stream: known.stream, seq, accepted: 0, duplicates: samples });
  }
  // The name is kept before anything is stored: a repeat after a crash goes to the same stream, which knows what it holds.
  const stream = known?.stream ?? place.stream ?? parts.newStreamName();
  const record = { stream, digest, atMs: known?.atMs ?? nowMs(), result: undefined };
  await idempotency.save(rigId, key, record);
  const response = await store(
    parts,
    request,
    format,
    { ...place, stream, seq: place.seq ?? 0 },
    record.atMs,
  );
  if ('accepted' in response.body) {
    const { seq, accepted, duplicates } = response.body;
    await idempotency.save(rigId, key, { ...record, result: { seq, samples: accepted + duplicates } });
  } else if (response.status === 400 || response.status === 422 || response.status === 413)
    await idempotency.forget(rigId, key);
  return response;
}

async function store(
  parts: HttpIngestParts,
  request: IngestRequest,
  format: Format,
  place: Place,
  nowMs: number,
): Promise<IngestResponse> {
  const { sink } = parts;
  const { rigId } = request;
  const read = await decode(parts, request, format, place, nowMs);
  if (!read.ok) return refusal(problemOf(read.issue));
  const stream = place.stream ?? parts.newStreamName();
  const count = read.recording.pieces.length;
  const firstSeq = place.seq ?? sink.reserveSeqs(rigId, stream, count);
  const cut = cutRecording(read.recording, stream, firstSeq);
  if (!cut.ok) return refusal(problemOf(cut.issue));
  const outcomes: BlockOutcome[] = [];
  for (let i = 0; i < count; i += blocksAtOnce) {
    const some = await offerAll(sink, rigId, cut.blocks.slice(i, i + blocksAtOnce));
    outcomes.push(...some);
    const broken = some.find((outcome) => outcome.result === 'unavailable');
    if (broken) return spoolUnavailable(broken.detail);
    const hopeless = some.every(
      (outcome) => outcome.result === 'refused' && outcome.issue.slug !== 'too-late',
    );
    if (hopeless) break;
  }
  return answer(cut.blocks.slice(0, outcomes.length), outcomes);
}

function answer(blocks: Block[], outcomes: BlockOutcome[]): IngestResponse {
  const reports = blocks.map((block, i) => reportOf(block.stream, block.seq, outcomes[i]!));
  const allRefused = outcomes.every((outcome) => outcome.result === 'refused');
  return answerReports(reports, blocks, outcomes, !allRefused);
}

function decode(
  parts: HttpIngestParts,
  request: IngestRequest,
  format: Format,
  place: Place,
  nowMs: number,
): Promise<RecordingResult> {
  const { body, codes, rigId } = request;
  if (format !== 'csv')
    return runInSteps(decodeSenmlSteps(body, { format, nowS: nowMs / 1000 }), parts.pause);
  const known = place.stream === undefined ? undefined : parts.sink.streamInfo(rigId, place.stream);
  const options = { codes, rateHz: place.rateHz, streamRateHz: known?.rateHz };
  return runInSteps(decodeCsvSteps(body, options), parts.pause);
}

/** What the `Turnmark-` headers say. */
function placeOf(request: IngestRequest): Place | IngestIssue {
  const stream = headerOf(request, 'turnmark-stream');
  const seq = headerOf(request, 'turnmark-seq');
  const rate = headerOf(request, 'turnmark-rate');
  const seqValue = seq === undefined ? undefined : /^\d{1,10}$/.test(seq) ? Number(seq) : NaN;
  const rateHz = rate === undefined ? undefined : rate.trim() === '' ? NaN : Number(rate);
  const fault =
    (stream === undefined ? undefined : streamFault(stream)) ??
    (seqValue === undefined ? undefined : seqFault(seqValue)) ??
    (rateHz === undefined ? undefined : rateFault(rateHz));
  if (fault !== undefined) return invalid(`Of the Turnmark headers: ${fault}`);
  return { stream, seq: seqValue, rateHz };
}
