/** `signal=zero-phase`: the filter run forward and backward, so that nothing is delayed. */
import type { CaptureRecord, CaptureStore } from '@/db';
import type { Samples } from '@/server/contract';
import { BothWaysFeed, longestMemorySamples } from '@/signal/both-ways-feed';
import { designFilters } from '@/signal/filter-design';
import type { Result } from '@/signal/model';
import type { SetupIssue } from '@/signal/pipeline-types';
import { memorySamples } from '@/signal/statistics/zero-phase';
import { ColumnFiller } from './column-filler';
import type { SamplesWish } from './samples';
import { captureStretches } from './stretches';
import { createTurns } from './turns';

/** The kept settings must have passed `validateSetup` at the capture's rate. Issue: the filter remembers for too long. */
export async function zeroPhaseSamples(
  store: CaptureStore,
  capture: CaptureRecord,
  wish: SamplesWish,
): Promise<Result<Samples, SetupIssue>> {
  const { rateHz, settings } = capture;
  const columns = new ColumnFiller(capture, wish);
  const sections = designFilters(settings.filter, rateHz);
  const memory = memorySamples(sections);
  if (!memory.ok || memory.value > longestMemorySamples) {
    const detail = 'A filter this slow cannot be run forward and backward.';
    return { ok: false, issue: { code: 'bad-filter', pointer: '/filter', detail } };
  }
  let at = 0;
  const feed = new BothWaysFeed([columns.setup], sections, memory.value, (_arrays, count, [volts]) => {
    if (volts !== undefined) columns.take(volts, count, at);
    at += count;
  });
  const turn = createTurns();
  for await (const stretch of captureStretches(store, capture, [wish.channel])) {
    if (stretch.kind === 'gap') {
      feed.end();
      at = stretch.startIndex + stretch.lostSamples;
      continue;
    }
    feed.push(stretch.arrays, stretch.count);
    // All that the picture needs is out.
    if (at >= columns.end) break;
    await turn();
  }
  feed.end();
  return { ok: true, value: columns.finish() };
}
