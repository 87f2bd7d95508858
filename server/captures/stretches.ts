/** A capture's samples and gaps in order of time, in slices small enough for one turn of the event loop. */
import type { CaptureRecord, CaptureStore } from '@/db';
import type { SampleArray } from '@/signal/model';

export type Stretch =
  | { kind: 'samples'; startIndex: number; count: number; arrays: SampleArray[] }
  | { kind: 'gap'; startIndex: number; lostSamples: number; estimated: boolean };

const sliceSamples = 16_384;

/** Of some channels, from the capture's first sample to `toIndex` (exclusive). */
export async function* captureStretches(
  store: CaptureStore,
  capture: Pick<CaptureRecord, 'id' | 'lengthSamples'>,
  channels: readonly string[],
  toIndex = capture.lengthSamples,
): AsyncGenerator<Stretch> {
  const gaps = (await store.gaps(capture.id)).filter((gap) => gap.fromIndex < toIndex);
  let next = 0;
  const gapsUpTo = function* (index: number): Generator<Stretch> {
    for (let gap = gaps[next]; gap !== undefined && gap.fromIndex <= index; gap = gaps[++next]) {
      yield {
        kind: 'gap',
        startIndex: gap.fromIndex,
        lostSamples: gap.lostSamples,
        estimated: gap.estimated,
      };
    }
  };
  for await (const piece of store.readChunks(capture.id, channels, { fromIndex: 0, toIndex })) {
    yield* gapsUpTo(piece.startIndex);
    const arrays = piece.channels.map(({ samples }) => samples);
    for (let from = 0; from < piece.count; from += sliceSamples) {
      const count = Math.min(sliceSamples, piece.count - from);
      const slices = arrays.map((array) => array.subarray(from, from + count));
      yield { kind: 'samples', startIndex: piece.startIndex + from, count, arrays: slices };
    }
  }
  yield* gapsUpTo(toIndex);
}
