/** Streams a rig through the hub's public ingest URL in real time. */
import { randomBytes } from 'node:crypto';
import { createBoard } from '@/simulator/board';
import { machineClock, type Clock } from '@/simulator/clock';
import type { HttpPost } from '@/simulator/http-post';
import { createHttpSender } from '@/simulator/http-sender';
import { createOutbox } from '@/simulator/outbox';
import type { Rig } from '@/simulator/rig-model';
import type { Sender, SenderEvent } from '@/simulator/sender';
import { encodeBlock, type WireFormat } from '@/simulator/wire';
import { createWsSender, type Connect } from '@/simulator/ws-sender';

export type Transport = 'http' | 'ws';
export type StreamOptions = {
  rig: Rig;
  baseUrl: string;
  key: string;
  transport: Transport;
  format: WireFormat;
  /** Length of a block, s. */
  blockS?: number;
  /** Seconds of the rig in one second of the clock. */
  speed?: number;
  /** Ends after so many seconds of the rig; runs for ever without. */
  seconds?: number;
  onEvent?: (event: SenderEvent) => void;
  /** For tests. */
  clock?: Clock;
  random?: () => number;
  newStreamName?: () => string;
  post?: HttpPost;
  connect?: Connect;
};
export type StreamStats = {
  blocks: number;
  samples: number;
  /** Not sent because the hub was away for longer than memory lasts. */
  dropped: number;
  /** Passed unsent because this machine could not keep up. */
  skipped: number;
  /** Made, but without the hub's ack when the run ended. */
  unacked: number;
  endedBecause: string | undefined;
};
export type RunningStream = {
  done: Promise<StreamStats>;
  stop(): Promise<StreamStats>;
  readonly stats: StreamStats;
};

const outboxLimits = { maxBlocks: 4096, maxBytes: 32 * 1024 * 1024 };
/** Behind by more than this, the board lets samples go rather than flood the hub. */
const maxBehindS = 5;
const drainMs = 3000;

export function streamRig(options: StreamOptions): RunningStream {
  const { rig, format, seconds = Infinity, speed = 1 } = options;
  const clock = options.clock ?? machineClock;
  const random = options.random ?? Math.random;
  const outbox = createOutbox(outboxLimits);
  const blockSamples = Math.max(1, Math.round(rig.spec.rateHz * (options.blockS ?? 0.04)));
  const board = createBoard(rig, blockSamples, options.newStreamName ?? bootName);
  const stopping = new AbortController();
  const stats: StreamStats = {
    blocks: 0,
    samples: 0,
    dropped: 0,
    skipped: 0,
    unacked: 0,
    endedBecause: undefined,
  };
  const senderOptions = {
    baseUrl: options.baseUrl,
    key: options.key,
    format,
    outbox,
    clock,
    random,
    onEvent: (event: SenderEvent) => options.onEvent?.(event),
  };
  const sender: Sender =
    options.transport === 'http'
      ? createHttpSender(senderOptions, options.post)
      : createWsSender(senderOptions, options.connect);

  async function run(): Promise<StreamStats> {
    const startMs = clock.nowMs();
    // The schedule is absolute: a block is due when its last sample has passed, so lateness never adds up.
    const dueMs = () => startMs + (1000 * rig.timeOf(board.index + blockSamples)) / speed;
    while (!stopping.signal.aborted && rig.timeOf(board.index + blockSamples) <= seconds + 1e-9) {
      const waitMs = dueMs() - clock.nowMs();
      if (waitMs > 0) await clock.sleep(waitMs, stopping.signal);
      if (stopping.signal.aborted || sender.endedBecause !== undefined) break;
      const behindS = ((clock.nowMs() - dueMs()) / 1000) * speed;
      if (behindS > maxBehindS * speed) {
        const blocks = Math.floor(behindS / rig.timeOf(blockSamples));
        board.skip(blocks);
        stats.skipped += blocks;
        continue;
      }
      const block = board.next();
      if (!block) continue;
      outbox.push(encodeBlock(block, format));
      stats.blocks += 1;
      stats.samples += block.length;
      sender.wake();
    }
    await sender.drained(AbortSignal.any([stopping.signal, AbortSignal.timeout(drainMs)]));
    await sender.stop();
    stats.dropped = outbox.dropped;
    stats.unacked = outbox.waiting;
    stats.endedBecause = sender.endedBecause;
    return stats;
  }

  const done = run();
  return {
    done,
    stats,
    stop() {
      stopping.abort();
      return done;
    },
  };
}

function bootName(): string {
  return `boot-${randomBytes(6).toString('hex')}`;
}
