/** The answer to a CBOR or JSON message. */
import type { Block } from '../block';
import type { BlockOutcome, BlockSink } from '../block-sink';
import type { MessageResult } from '../decoders/result';
import { acceptance, refusal, spoolUnavailable } from './http-types';
import type { IngestResponse } from './http-types';
import { offerAll } from './offer-all';
import { problem, problemOf } from './problem';
import type { BlockReport } from './problem';

export async function answerMessage(
  sink: BlockSink,
  rigId: string,
  message: MessageResult,
): Promise<IngestResponse> {
  if (!message.ok) return refusal(problemOf(message.issue));
  const good: Block[] = [];
  for (const result of message.blocks) if (result.ok) good.push(result.block);
  const offered = offerAll(sink, rigId, good);
  for (const result of message.blocks) {
    if (!result.ok && result.stream !== undefined && result.seq !== undefined)
      sink.refuse(rigId, result.stream, result.seq);
  }
  const outcomes = await offered;
  const broken = outcomes.find((outcome) => outcome.result === 'unavailable');
  if (broken) return spoolUnavailable(broken.detail);
  let next = 0;
  const reports = message.blocks.map((result): BlockReport => {
    if (result.ok) return reportOf(result.block.stream, result.block.seq, outcomes[next++]!);
    const { stream, seq, issue } = result;
    return { stream, seq, result: 'refused', problem: problemOf(issue, stream, seq) };
  });
  return answerReports(reports, good, outcomes, message.batch);
}

export function reportOf(stream: string, seq: number, outcome: BlockOutcome): BlockReport {
  if (outcome.result === 'refused')
    return { stream, seq, result: 'refused', problem: problemOf(outcome.issue, stream, seq) };
  return { stream, seq, result: outcome.result === 'duplicate' ? 'duplicate' : 'accepted' };
}

/** 202 where nothing was refused; the block's own problem where it was alone, else a 422 that lists all. */
export function answerReports(
  reports: BlockReport[],
  good: Block[],
  outcomes: BlockOutcome[],
  batch: boolean,
): IngestResponse {
  const refused = reports.filter((report) => report.result === 'refused');
  if (refused.length > 0) {
    if (!batch) return refusal(refused[0]!.problem!);
    const detail =
      refused.length === reports.length
        ? `All ${reports.length} blocks were refused.`
        : `${refused.length} of ${reports.length} blocks were refused; the others are kept.`;
    return refusal({ ...problem('invalid', 422, detail), blocks: reports });
  }
  let accepted = 0;
  let duplicates = 0;
  good.forEach((block, i) => {
    if (outcomes[i]!.result === 'accepted') accepted += block.length;
    else duplicates += block.length;
  });
  const last = good.at(-1)!;
  return acceptance({ stream: last.stream, seq: last.seq, accepted, duplicates });
}
