import type { Block } from '../block';
import type { BlockOutcome, BlockSink } from '../block-sink';

/** Offers blocks in order, all at once; resolves with their outcomes when the last is known. */
export function offerAll(sink: BlockSink, rigId: string, blocks: Block[]): Promise<BlockOutcome[]> {
  return new Promise((resolve) => {
    const outcomes = new Array<BlockOutcome>(blocks.length);
    let left = blocks.length;
    if (left === 0) resolve(outcomes);
    const done = (outcome: BlockOutcome, _stream: string, _seq: number, token: number): void => {
      outcomes[token] = outcome;
      if (--left === 0) resolve(outcomes);
    };
    blocks.forEach((block, i) => sink.offer(rigId, block, i, done));
  });
}
