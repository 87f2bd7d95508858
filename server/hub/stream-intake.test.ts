import * as fc from 'fast-check';
import { afterEach, describe, expect, it } from 'vitest';
import { openDatabases } from '@/db/open';
import type { Databases } from '@/db/open';
import type { Spool, SpoolBatch } from '@/db/spool-types';
import type { Block } from '@/ingest/block';
import type { BlockOutcome } from '@/ingest/block-sink';
import type { CommitSource } from '@/server/hub/committer';
import { StreamIntake } from '@/server/hub/stream-intake';

const opened: Databases[] = [];
afterEach(() => opened.splice(0).forEach((db) => db.close()));

const rateHz = 1000;

function blockOf(seq: number, length: number): Block {
  const samples = Int16Array.from({ length }, (_, i) => seq * 100 + i);
  return { stream: 'boot', seq, rateHz, timeS: undefined, length, channels: [{ name: 'A', samples }] };
}

/** Commits by hand, and fails when told to; what fails must be collected again. */
function bench(spool: Spool) {
  const dirty = new Set<CommitSource>();
  const lines: number[] = [];
  const gaps: number[] = [];
  let nowMs = 0;
  const events = {
    samples: (_: StreamIntake, startIndex: number, arrays: readonly ArrayLike<number>[]) =>
      void Array.from(arrays[0] as ArrayLike<number>).forEach((v, i) => (lines[startIndex + i] = v)),
    gap: (_: StreamIntake, lost: number) => void gaps.push(lost),
    dirty: (intake: StreamIntake) => void dirty.add(intake),
    acked: () => undefined,
  };
  const commit = (works: boolean) => {
    const batch: SpoolBatch & Record<string, unknown[]> = {
      segments: [],
      early: [],
      releasedEarly: [],
      gaps: [],
      streams: [],
    } as never;
    const taken = [...dirty];
    dirty.clear();
    for (const source of taken) source.collect(batch as never);
    if (works) {
      spool.commit(batch);
      for (const source of taken) source.committed();
    } else {
      for (const source of taken) {
        dirty.add(source);
        source.failed('full');
      }
    }
  };
  return { events, commit, dirty, lines, gaps, tick: (ms: number) => (nowMs += ms), now: () => nowMs };
}

function stored(spool: Spool, streamId: number): number[] {
  const values: number[] = [];
  for (const segment of spool.readSegments(streamId, 0, 1e9)) {
    Array.from(segment.channels[0]?.samples ?? []).forEach((v, i) => (values[segment.startIndex + i] = v));
  }
  return values;
}

/** One open stream, nothing of it held yet. */
function oneStream() {
  const databases = openDatabases({ dataDir: ':memory:', durability: 'normal' });
  opened.push(databases);
  const { spool } = databases;
  const b = bench(spool);
  const streamId = spool.openStream({ rigId: 'r', name: 'boot', rateHz, channels: ['A'], nowMs: 0 });
  const opening = { rateHz, channels: ['A'], lastBlockAtMs: 0 };
  return { b, spool, streamId, intake: new StreamIntake(streamId, 'r', 'boot', opening, b.events) };
}

describe('a stream on its way in', () => {
  it('stores every block once and in order, however they come and whatever commit fails', () => {
    const deal = fc.record({
      order: fc.shuffledSubarray([...Array(12).keys()], { minLength: 12 }),
      lengths: fc.array(fc.integer({ min: 1, max: 9 }), { minLength: 13, maxLength: 13 }),
      repeats: fc.array(fc.integer({ min: 0, max: 12 }), { maxLength: 6 }),
      commits: fc.array(fc.constantFrom('none', 'works', 'fails'), { minLength: 13, maxLength: 13 }),
      restartAt: fc.integer({ min: 0, max: 13 }),
    });
    fc.assert(
      fc.property(deal, ({ order, lengths, repeats, commits, restartAt }) => {
        const databases = openDatabases({ dataDir: ':memory:', durability: 'normal' });
        opened.push(databases);
        const { spool } = databases;
        const b = bench(spool);
        const streamId = spool.openStream({ rigId: 'r', name: 'boot', rateHz, channels: ['A'], nowMs: 0 });
        const opening = { rateHz, channels: ['A'], lastBlockAtMs: 0 };
        let intake = new StreamIntake(streamId, 'r', 'boot', opening, b.events);
        const outcomes = new Map<number, BlockOutcome['result'][]>();
        const offer = (seq: number) =>
          intake.offer(
            blockOf(seq, lengths[seq] as number),
            0,
            (outcome, _stream, done) => outcomes.set(done, [...(outcomes.get(done) ?? []), outcome.result]),
            b.now(),
          );
        offer(0);
        b.commit(true);
        order.forEach((place, i) => {
          if (i === restartAt) {
            // What was not acked is gone with the process; the sender still has it and sends it again.
            b.dirty.clear();
            const again = spool.findStream('r', 'boot');
            intake = StreamIntake.restore(again as never, spool, b.events, b.now());
          }
          offer(place + 1);
          if (repeats.includes(place)) offer(place + 1);
          if (commits[i] !== 'none') b.commit(commits[i] === 'works');
        });
        // A sender repeats what is not acked, as the contract says.
        for (let seq = 1; seq <= 12; seq += 1) offer(seq);
        b.commit(true);
        const wanted = Array.from({ length: 13 }, (_, seq) =>
          Array.from(blockOf(seq, lengths[seq] as number).channels[0]!.samples),
        ).flat();
        expect(stored(spool, streamId)).toEqual(wanted);
        expect(b.gaps).toEqual([]);
        expect(intake.ackedSeq).toBe(12);
        for (let seq = 1; seq <= 12; seq += 1)
          expect(outcomes.get(seq)).toContain(
            outcomes.get(seq)?.includes('accepted') ? 'accepted' : 'duplicate',
          );
        expect(spool.readEarly(streamId)).toEqual([]);
        databases.close();
        opened.pop();
      }),
      { numRuns: 60 },
    );
  });

  it('acks nothing before the commit, and says unavailable when it fails', () => {
    const { b, spool, streamId, intake } = oneStream();
    const seen: string[] = [];
    const note = (outcome: BlockOutcome) => void seen.push(outcome.result);
    intake.offer(blockOf(5, 4), 0, note, 0);
    expect([seen, intake.ackedSeq]).toEqual([[], undefined]);
    b.commit(false);
    expect([seen, intake.ackedSeq]).toEqual([['unavailable'], undefined]);
    intake.offer(blockOf(5, 4), 0, note, 0);
    b.commit(true);
    expect([seen, intake.ackedSeq]).toEqual([['unavailable', 'duplicate'], 5]);
    expect(stored(spool, streamId)).toEqual([500, 501, 502, 503]);
  });

  it('keeps a gap as it was told, and refuses what comes after all', () => {
    const { b, spool, streamId, intake } = oneStream();
    const seen: BlockOutcome[] = [];
    const note = (outcome: BlockOutcome) => void seen.push(outcome);
    intake.offer(blockOf(0, 4), 0, note, 0);
    intake.offer(blockOf(2, 4), 0, note, 100);
    intake.advance(2_099);
    expect(b.gaps).toEqual([]);
    intake.advance(2_100);
    expect(b.gaps).toEqual([4]);
    b.commit(true);
    expect(spool.readGaps(streamId, 0, 100)).toEqual([{ fromIndex: 4, lostSamples: 4, estimated: true }]);
    intake.offer(blockOf(1, 4), 0, note, 2_200);
    expect(seen[seen.length - 1]).toMatchObject({ result: 'refused', issue: { slug: 'too-late' } });
    expect(intake.ackedSeq).toBe(2);
  });

  it('knows where everything that is held ends once the missing block is declared lost', async () => {
    const { intake } = oneStream();
    const quiet = () => undefined;
    intake.offer(blockOf(0, 4), 0, quiet, 0);
    expect(await intake.whenOrdered()).toBe(4);
    intake.offer(blockOf(2, 4), 0, quiet, 100);
    intake.offer(blockOf(3, 4), 0, quiet, 110);
    const end = intake.whenOrdered();
    intake.offer(blockOf(4, 4), 0, quiet, 120);
    intake.advance(2_100);
    expect(await end).toBe(16);
    expect(intake.nextIndex).toBe(20);
  });
});
