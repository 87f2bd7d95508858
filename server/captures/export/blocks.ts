/** A capture as blocks of the wire format, so that what was exported can be streamed to a rig again. */
import { randomUUID } from 'node:crypto';
import type { CaptureRecord, CaptureStore } from '@/db';
import { blockLimits } from '@/ingest/block';
import type { SampleArray } from '@/signal/model';
import { captureStretches } from '../stretches';

export type ExportBlock = {
  stream: string;
  seq: number;
  rate: number;
  /** s from the capture's first sample. */
  time: number;
  channels: readonly string[];
  arrays: readonly SampleArray[];
};

/** Room for the keys and the name of the stream in a batch. */
const frameBytes = 2048;

/**
 * In order; `bytesPerSample` tells how large a sample may get as written, so that a batch of one block stays within a
 * message. A gap is a missing number, its length the difference of the neighbours' times.
 */
export async function* exportBlocks(
  store: CaptureStore,
  capture: CaptureRecord,
  bytesPerSample: (array: SampleArray) => number,
): AsyncGenerator<ExportBlock> {
  const { channels, rateHz } = capture;
  const stream = `export-${randomUUID()}`;
  let seq = 0;
  for await (const stretch of captureStretches(store, capture, channels)) {
    if (stretch.kind === 'gap') {
      seq += 1;
      continue;
    }
    const rowBytes = stretch.arrays.reduce((sum, array) => sum + bytesPerSample(array), 0);
    const most = Math.floor((blockLimits.maxMessageBytes - frameBytes) / rowBytes);
    for (let from = 0; from < stretch.count; from += most) {
      const to = Math.min(stretch.count, from + most);
      const time = (stretch.startIndex + from) / rateHz;
      const arrays = stretch.arrays.map((array) => array.subarray(from, to));
      yield { stream, seq, rate: rateHz, time, channels, arrays };
      seq += 1;
    }
  }
}
