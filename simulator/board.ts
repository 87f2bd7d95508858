/**
 * The board's firmware: cuts the rig's samples into blocks, names streams, numbers blocks, loses blocks and restarts
 * where the rig's faults say so. Pure: no clock, no network.
 */
import type { Block } from '@/ingest/block';
import type { Rig } from '@/simulator/rig-model';

export type Board = {
  /** The next block on the sample clock; undefined where the board sends none (down, or the block is lost). */
  next(): Block | undefined;
  /** Samples that have passed since the beginning. */
  readonly index: number;
  /** Lets `blocks` pass unsent, as a board that could not keep up. */
  skip(blocks: number): void;
};

/** `newStreamName` is asked at each boot. */
export function createBoard(rig: Rig, blockSamples: number, newStreamName: () => string): Board {
  const { rateHz } = rig.spec;
  let index = 0;
  let stream = newStreamName();
  let seq = 0;
  let bootIndex = 0;
  let isDown = false;

  function next(): Block | undefined {
    const start = index;
    index += blockSamples;
    const faults = rig.faultsAt(rig.timeOf(start));
    if (faults.some((fault) => fault.kind === 'restart')) {
      isDown = true;
      return undefined;
    }
    if (isDown) {
      isDown = false;
      stream = newStreamName();
      seq = 0;
      bootIndex = start;
    }
    const number = seq;
    seq += 1;
    if (faults.some((fault) => fault.kind === 'lost-blocks')) return undefined;
    const arrays = rig.block(start, blockSamples);
    return {
      stream,
      seq: number,
      rateHz,
      timeS: (start - bootIndex) / rateHz,
      length: blockSamples,
      channels: rig.channels.map((name, c) => ({ name, samples: arrays[c] as (typeof arrays)[number] })),
    };
  }

  return {
    next,
    get index() {
      return index;
    },
    skip(blocks) {
      index += blocks * blockSamples;
      seq += blocks;
    },
  };
}
