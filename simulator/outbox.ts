/**
 * What a board still has to send. A block stays until the hub has acked it; after a reconnect all that is left goes
 * out again. Memory is bounded: when it is full the oldest blocks are given up, and counted.
 */
import type { WireBlock } from '@/simulator/wire';

export type Outbox = {
  push(block: WireBlock): void;
  /** The next blocks that were not handed out yet, at least one where there is any; marks them as handed out. */
  take(maxBlocks: number, maxBytes: number): WireBlock[];
  /** Everything up to and including `seq` of that stream is settled; older streams are left alone. */
  ack(stream: string, seq: number): number;
  /** One block is settled, whatever stands before it. */
  settle(stream: string, seq: number): boolean;
  /** All that is left is to be handed out again. */
  rewind(): void;
  readonly waiting: number;
  readonly unsent: number;
  readonly bytes: number;
  readonly dropped: number;
};

export function createOutbox(limits: { maxBlocks: number; maxBytes: number }): Outbox {
  let blocks: WireBlock[] = [];
  let handedOut = 0;
  let bytes = 0;
  let dropped = 0;

  function remove(settled: (block: WireBlock) => boolean): number {
    const before = blocks.length;
    let sent = 0;
    blocks = blocks.filter((block, i) => {
      const goes = i < handedOut && settled(block);
      if (goes) bytes -= block.bytes.length;
      else if (i < handedOut) sent += 1;
      return !goes;
    });
    handedOut = sent;
    return before - blocks.length;
  }

  return {
    push(block) {
      blocks.push(block);
      bytes += block.bytes.length;
      while (blocks.length > 1 && (blocks.length > limits.maxBlocks || bytes > limits.maxBytes)) {
        bytes -= (blocks.shift() as WireBlock).bytes.length;
        if (handedOut > 0) handedOut -= 1;
        dropped += 1;
      }
    },
    take(maxBlocks, maxBytes) {
      const taken: WireBlock[] = [];
      let size = 0;
      while (handedOut < blocks.length && taken.length < maxBlocks) {
        const block = blocks[handedOut] as WireBlock;
        if (taken.length > 0 && size + block.bytes.length > maxBytes) break;
        size += block.bytes.length;
        taken.push(block);
        handedOut += 1;
      }
      return taken;
    },
    ack: (stream, seq) => remove((block) => block.stream === stream && block.seq <= seq),
    settle: (stream, seq) => remove((block) => block.stream === stream && block.seq === seq) > 0,
    rewind() {
      handedOut = 0;
    },
    get waiting() {
      return blocks.length;
    },
    get unsent() {
      return blocks.length - handedOut;
    },
    get bytes() {
      return bytes;
    },
    get dropped() {
      return dropped;
    },
  };
}
