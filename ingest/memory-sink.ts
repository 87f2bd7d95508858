/**
 * A block sink that stores nothing but keeps the order: what tests of transports and small programs use in the hub's place.
 * Outcomes come when `commit` is called, as a hub's come after a group commit.
 */
import { createAssembler } from './assembler';
import type { Assembler, Gap } from './assembler';
import type { Block } from './block';
import { acceptedOutcome, duplicateOutcome } from './block-sink';
import type { BlockOutcome, BlockSink } from './block-sink';

export type MemorySink = BlockSink & {
  /** What came out in order, of all streams. */
  blocks: { rigId: string; block: Block; startIndex: number }[];
  gaps: { rigId: string; stream: string; gap: Gap }[];
  commit(): void;
  /** Blocks offered and not committed. */
  pending(): number;
  /** From now on every block is `unavailable`; undefined ends that. */
  fail(detail: string | undefined): void;
  advance(nowS: number): void;
};

export function createMemorySink(
  options: { channels?: string[]; nowS?: () => number; autoCommit?: boolean } = {},
): MemorySink {
  const { channels, nowS = () => 0, autoCommit = false } = options;
  const streams = new Map<
    string,
    { rigId: string; stream: string; assembler: Assembler<Block>; acked?: number; reserved: number }
  >();
  const watchers = new Set<{ rigId: string; moved: (stream: string) => void }>();
  let waiting: (() => void)[] = [];
  let failing: string | undefined;
  const id = (rigId: string, stream: string): string => JSON.stringify([rigId, stream]);

  function entryOf(rigId: string, stream: string) {
    const key = id(rigId, stream);
    let entry = streams.get(key);
    if (entry === undefined) {
      const assembler = createAssembler<Block>({
        keep: copyBlock,
        events: {
          block: (block, startIndex) => sink.blocks.push({ rigId, block: copyBlock(block), startIndex }),
          gap: (gap) => sink.gaps.push({ rigId, stream, gap }),
        },
      });
      entry = { rigId, stream, assembler, reserved: 0 };
      streams.set(key, entry);
    }
    return entry;
  }

  function judge(rigId: string, block: Block): BlockOutcome {
    if (failing !== undefined) return { result: 'unavailable', detail: failing };
    const unknown = channels && block.channels.find((channel) => !channels.includes(channel.name));
    if (unknown) {
      const detail = `The rig has no channel ${JSON.stringify(unknown.name)}.`;
      const pointer = `/samples/${unknown.name}`;
      sink.refuse(rigId, block.stream, block.seq);
      return { result: 'refused', issue: { slug: 'invalid', status: 422, detail, pointer, at: undefined } };
    }
    const verdict = entryOf(rigId, block.stream).assembler.offer(block, nowS());
    if (verdict.result === 'accepted') return acceptedOutcome;
    return verdict.result === 'duplicate' ? duplicateOutcome : verdict;
  }

  function moveAcks(): void {
    for (const entry of streams.values()) {
      const seq = entry.assembler.ackSeq();
      if (seq === undefined || seq === entry.acked) continue;
      entry.acked = seq;
      for (const watcher of watchers) if (watcher.rigId === entry.rigId) watcher.moved(entry.stream);
    }
  }

  const sink: MemorySink = {
    blocks: [],
    gaps: [],
    offer(rigId, block, token, done) {
      const outcome = judge(rigId, block);
      const { stream, seq } = block;
      waiting.push(() => done(outcome, stream, seq, token));
      if (autoCommit) sink.commit();
    },
    refuse(rigId, stream, seq) {
      streams.get(id(rigId, stream))?.assembler.refuse(seq);
    },
    ackPosition: (rigId, stream) => streams.get(id(rigId, stream))?.acked,
    watchAcks(rigId, moved) {
      const watcher = { rigId, moved };
      watchers.add(watcher);
      return () => watchers.delete(watcher);
    },
    streamInfo(rigId, stream) {
      const rateHz = streams.get(id(rigId, stream))?.assembler.rateHz();
      return rateHz === undefined ? undefined : { rateHz };
    },
    reserveSeqs(rigId, stream, count) {
      const entry = entryOf(rigId, stream);
      const first = Math.max(entry.reserved, entry.assembler.freshSeq());
      entry.reserved = first + count;
      return first;
    },
    commit() {
      const now = waiting;
      waiting = [];
      moveAcks();
      for (const tell of now) tell();
    },
    pending: () => waiting.length,
    fail(detail) {
      failing = detail;
    },
    advance(timeS) {
      for (const { assembler } of streams.values()) assembler.advance(timeS);
      moveAcks();
    },
  };
  return sink;
}

/** A block whose samples are its own memory. */
function copyBlock(block: Block): Block {
  return {
    ...block,
    channels: block.channels.map(({ name, samples }) => ({ name, samples: samples.slice() })),
  };
}
