/** Blocks in a file, put in their places on the capture's axis. */
import type { CaptureGap, Piece } from '@/db';
import type { Block, IngestIssue } from '@/ingest/block';
import { gapLength } from '@/ingest/gap-length';
import { createTurns } from '../turns';
import { cborFileBlocks, jsonFileBlocks } from './file-blocks';
import type { FileBlock } from './file-blocks';
import { refused, unixTimeOf } from './upload';
import type { UploadResult } from './upload';

type FileBlocks = () => Generator<FileBlock>;

function withPlace(issue: IngestIssue, message: number): { ok: false; issue: IngestIssue } {
  const at = issue.at === undefined ? `message ${message}` : `message ${message}, ${issue.at}`;
  return { ok: false, issue: { ...issue, at } };
}

type Loss = Omit<CaptureGap, 'fromIndex'>;

/** Lost samples between two blocks of a stream, as on the wire; undefined where one follows the other. */
function lossBetween(before: Block, after: Block, rateHz: number, fromIndex: number): Loss | undefined {
  const missingBlocks = after.seq - before.seq - 1;
  if (missingBlocks === 0) return undefined;
  const endTimeS = before.timeS === undefined ? undefined : before.timeS + before.length / rateHz;
  const lastLength = before.length;
  return gapLength({ endTimeS, nextTimeS: after.timeS, rateHz, fromIndex, missingBlocks, lastLength });
}

const namesOf = (block: Block) => block.channels.map(({ name }) => name);

type Placed = { block: Block; startIndex: number; loss: Loss | undefined };

/** Each block with its place on the capture's axis, or the first thing that is wrong. */
function* placed(blocks: FileBlocks): Generator<Placed, IngestIssue | undefined> {
  let first: Block | undefined;
  let last: Block | undefined;
  let next = 0;
  for (const { result, message } of blocks()) {
    if (!result.ok) return withPlace(result.issue, message).issue;
    const { block } = result;
    first ??= block;
    const fault = faultOf(first, last, block);
    if (fault !== undefined) return withPlace(refused(fault).issue, message).issue;
    if (last !== undefined && block.seq === last.seq) continue;
    const loss = last === undefined ? undefined : lossBetween(last, block, first.rateHz ?? 1, next);
    next += loss?.lostSamples ?? 0;
    yield { block, startIndex: next, loss };
    next += block.length;
    last = block;
  }
  return first === undefined ? refused('The file holds no block.').issue : undefined;
}

function faultOf(first: Block, last: Block | undefined, block: Block): string | undefined {
  if (first.rateHz === undefined) return 'The first block must give the rate.';
  if (block.stream !== first.stream)
    return `The file holds two streams, "${first.stream}" and "${block.stream}".`;
  if (block.rateHz !== undefined && block.rateHz !== first.rateHz)
    return 'The rate changes within the stream.';
  const wanted = namesOf(first);
  if (block.channels.length !== wanted.length || !namesOf(block).every((name) => wanted.includes(name))) {
    return 'The channels change within the stream.';
  }
  if (last !== undefined && block.seq < last.seq) return `Block ${block.seq} comes after block ${last.seq}.`;
  return undefined;
}

async function readBlocks(blocks: FileBlocks): Promise<UploadResult> {
  const gaps: CaptureGap[] = [];
  let first: Block | undefined;
  let lengthSamples = 0;
  // Read through once before anything is stored: a fault in the last block must leave nothing behind.
  const walk = placed(blocks);
  const turn = createTurns();
  for (let step = walk.next(); ; step = walk.next()) {
    if (step.done) {
      if (step.value !== undefined) return { ok: false, issue: step.value };
      break;
    }
    await turn();
    const { block, startIndex, loss } = step.value;
    first ??= block;
    if (loss !== undefined) gaps.push({ fromIndex: startIndex - loss.lostSamples, ...loss });
    lengthSamples = startIndex + block.length;
  }
  if (first === undefined) return refused('The file holds no block.');

  function* pieces(): Generator<Piece> {
    for (const { block, startIndex } of placed(blocks)) {
      yield { startIndex, count: block.length, channels: block.channels };
    }
  }
  return {
    ok: true,
    upload: {
      rateHz: first.rateHz ?? 1,
      channels: namesOf(first),
      stream: first.stream,
      startedAtS: unixTimeOf(first.timeS),
      gaps,
      lengthSamples,
      pieces,
    },
  };
}

export const readCborFile = (bytes: Uint8Array) => readBlocks(() => cborFileBlocks(bytes));
export const readJsonFile = (bytes: Uint8Array) => readBlocks(() => jsonFileBlocks(bytes));
