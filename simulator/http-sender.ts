/** Sends an outbox by POST, one request at a time; what piled up meanwhile goes as one batch. */
import { backOffMs } from '@/simulator/clock';
import { createHttpPost, type HttpPost, type HttpReply } from '@/simulator/http-post';
import { createSignalFlag, type Sender, type SenderOptions } from '@/simulator/sender';
import { joinBlocks, type WireBlock } from '@/simulator/wire';

const maxBatchBlocks = 32;
const maxBatchBytes = 512 * 1024;

export function createHttpSender(options: SenderOptions, post: HttpPost = createHttpPost()): Sender {
  const { outbox, clock, random, onEvent } = options;
  const url = new URL('/ingest/v1/samples', options.baseUrl).href;
  const headers = { 'Content-Type': `application/${options.format}`, Authorization: `Bearer ${options.key}` };
  const work = createSignalFlag();
  const quiet = createSignalFlag();
  const stopping = new AbortController();
  let endedBecause: string | undefined;
  let failures = 0;
  /** So many blocks still go one by one. */
  let singly = 0;

  async function run(): Promise<void> {
    while (!stopping.signal.aborted && endedBecause === undefined) {
      const batch = outbox.take(singly > 0 ? 1 : maxBatchBlocks, maxBatchBytes);
      if (batch.length === 0) {
        quiet.raise();
        await work.wait(stopping.signal);
      } else await send(batch);
    }
    quiet.raise();
  }

  async function send(batch: WireBlock[]): Promise<void> {
    let reply: HttpReply;
    try {
      reply = await post(url, headers, joinBlocks(batch, options.format));
    } catch (error) {
      return retry(backOffMs((failures += 1), random), reasonOf(error));
    }
    if (reply.status === 202) return settle(batch, () => true);
    if (reply.status === 401 || reply.status === 403)
      return end(`the hub refused the rig key (${reply.status})`);
    if (reply.status === 429 || reply.status >= 500) {
      const afterS = Number(reply.retryAfter);
      const waitMs =
        reply.retryAfter !== null && afterS >= 0 ? afterS * 1000 : backOffMs((failures += 1), random);
      return retry(waitMs, `the hub answered ${reply.status}`);
    }
    const results = blockResults(reply.body);
    onEvent({ kind: 'refused', detail: detailOf(reply) });
    const named = (block: WireBlock) => results.some((r) => r.stream === block.stream && r.seq === block.seq);
    if (batch.some(named)) return settle(batch, named);
    if (batch.length > 1) {
      // A message that is refused whole: the blocks go again one by one, so that the good ones are kept.
      singly = batch.length;
      outbox.rewind();
      return;
    }
    settle(batch, () => true);
  }

  function settle(batch: WireBlock[], settled: (block: WireBlock) => boolean): void {
    failures = 0;
    singly = Math.max(0, singly - 1);
    for (const block of batch) if (settled(block)) outbox.settle(block.stream, block.seq);
    outbox.rewind();
    const last = batch[batch.length - 1];
    if (last) onEvent({ kind: 'acked', stream: last.stream, seq: last.seq });
  }
  async function retry(afterMs: number, reason: string): Promise<void> {
    onEvent({ kind: 'retry', afterMs, reason });
    await clock.sleep(afterMs, stopping.signal);
    outbox.rewind();
  }
  function end(reason: string): void {
    endedBecause = reason;
    outbox.rewind();
    onEvent({ kind: 'ended', reason });
  }

  const running = run();
  return {
    wake: work.raise,
    async drained(signal) {
      while (outbox.waiting > 0 && endedBecause === undefined && !signal.aborted) await quiet.wait(signal);
    },
    async stop() {
      stopping.abort();
      await running;
    },
    get endedBecause() {
      return endedBecause;
    },
  };
}

type BlockResult = { stream: string; seq: number };

function blockResults(body: string): BlockResult[] {
  const problem = parsed(body);
  return Array.isArray(problem?.blocks) ? (problem.blocks as BlockResult[]) : [];
}

function detailOf(reply: HttpReply): string {
  const problem = parsed(reply.body);
  return `${reply.status} ${String(problem?.detail ?? problem?.title ?? '')}`.trim();
}

function parsed(body: string): Record<string, unknown> | undefined {
  try {
    const value: unknown = JSON.parse(body);
    return typeof value === 'object' && value !== null ? (value as Record<string, unknown>) : undefined;
  } catch {
    return undefined;
  }
}

function reasonOf(error: unknown): string {
  return error instanceof Error ? error.message || error.name : String(error);
}
