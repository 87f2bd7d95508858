import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { createAssembler, reorderWindow } from './assembler';
import type { AssemblerState, BlockHead, Gap } from './assembler';

type Event = { seq: number; startIndex: number } | Gap;

function block(seq: number, fields: Partial<BlockHead> = {}): BlockHead {
  return {
    seq,
    rateHz: 1000,
    timeS: undefined,
    length: 10,
    channels: [{ name: 'A' }, { name: 'B' }],
    ...fields,
  };
}

function setUp(restored?: AssemblerState) {
  const events: Event[] = [];
  const assembler = createAssembler<BlockHead>({
    restored,
    events: {
      block: ({ seq }, startIndex) => events.push({ seq, startIndex }),
      gap: (gap) => events.push(gap),
    },
  });
  return { assembler, events };
}

const seqs = (events: Event[]): (number | string)[] =>
  events.map((event) => ('seq' in event ? event.seq : `gap ${event.fromSeq}+${event.missingBlocks}`));

describe('assembler', () => {
  it('begins at any number, with index 0 and no gap', () => {
    const { assembler, events } = setUp();
    expect(assembler.offer(block(4_000_000_000), 0)).toEqual({ result: 'accepted' });
    assembler.offer(block(4_000_000_001, { length: 7 }), 0);
    expect(events).toEqual([
      { seq: 4_000_000_000, startIndex: 0 },
      { seq: 4_000_000_001, startIndex: 10 },
    ]);
    expect(assembler.ackSeq()).toBe(4_000_000_001);
  });

  it('needs the rate in the first block only', () => {
    const { assembler, events } = setUp();
    const refused = assembler.offer(block(0, { rateHz: undefined }), 0);
    expect(refused).toMatchObject({ result: 'refused', issue: { slug: 'invalid', pointer: '/rate' } });
    expect(assembler.ackSeq()).toBeUndefined();
    assembler.offer(block(1), 0);
    expect(assembler.offer(block(2, { rateHz: undefined }), 0)).toEqual({ result: 'accepted' });
    expect(seqs(events)).toEqual([1, 2]);
  });

  it('refuses another rate or set of channels, and lets the ack pass over the refused block', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0), 0);
    expect(assembler.offer(block(1, { rateHz: 1001 }), 0)).toMatchObject({
      issue: { slug: 'stream-changed', pointer: '/rate' },
    });
    expect(assembler.ackSeq()).toBe(1);
    expect(assembler.offer(block(2, { channels: [{ name: 'A' }] }), 0)).toMatchObject({
      issue: { slug: 'stream-changed', status: 422, pointer: '/samples' },
    });
    expect(assembler.offer(block(2, { channels: [{ name: 'A' }, { name: 'C' }] }), 0)).toMatchObject({
      issue: { slug: 'stream-changed' },
    });
    assembler.offer(block(3), 0);
    expect(seqs(events)).toEqual([0, 'gap 1+2', 3]);
  });

  it('takes channels in another order and puts them into the stream’s own', () => {
    const { assembler } = setUp();
    assembler.offer(block(0), 0);
    const swapped = block(1, { channels: [{ name: 'B' }, { name: 'A' }] });
    expect(assembler.offer(swapped, 0)).toEqual({ result: 'accepted' });
    expect(swapped.channels.map(({ name }) => name)).toEqual(['A', 'B']);
  });

  it('takes a corrected block after its refusal, while nothing later has come', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0), 0);
    assembler.refuse(1);
    expect(assembler.ackSeq()).toBe(1);
    expect(assembler.offer(block(1), 0)).toEqual({ result: 'accepted' });
    expect(seqs(events)).toEqual([0, 1]);
  });

  it('drops duplicates, in order and waiting', () => {
    const { assembler, events } = setUp();
    for (const seq of [0, 1, 3, 3, 1, 0, 2, 3]) assembler.offer(block(seq), 0);
    expect(seqs(events)).toEqual([0, 1, 2, 3]);
    expect(assembler.offer(block(2), 0)).toEqual({ result: 'duplicate' });
  });

  it('waits for a missing block until 64 later ones have come', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0), 0);
    for (let seq = 2; seq < 65; seq++) assembler.offer(block(seq), 0);
    expect(seqs(events)).toEqual([0]);
    expect(assembler.ackSeq()).toBe(0);
    assembler.offer(block(65), 0);
    expect(seqs(events).slice(0, 3)).toEqual([0, 'gap 1+1', 2]);
    expect(assembler.ackSeq()).toBe(65);
    expect(reorderWindow.blocks).toBe(64);
  });

  it('waits 2 s from the first later block', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0), 100);
    expect(assembler.deadlineS()).toBeUndefined();
    assembler.offer(block(3), 101);
    assembler.offer(block(2), 102);
    expect(assembler.deadlineS()).toBe(103);
    assembler.advance(102.999);
    expect(seqs(events)).toEqual([0]);
    assembler.advance(103);
    expect(seqs(events)).toEqual([0, 'gap 1+1', 2, 3]);
    expect(assembler.deadlineS()).toBeUndefined();
  });

  it('gives a second hole its own 2 s', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0), 0);
    assembler.offer(block(2), 1);
    assembler.offer(block(4), 2.5);
    assembler.advance(3);
    expect(seqs(events)).toEqual([0, 'gap 1+1', 2]);
    expect(assembler.deadlineS()).toBe(4.5);
    assembler.advance(4.5);
    expect(seqs(events)).toEqual([0, 'gap 1+1', 2, 'gap 3+1', 4]);
  });

  it('refuses what was declared lost, and what is older than the first block', () => {
    const { assembler } = setUp();
    assembler.offer(block(5), 0);
    assembler.offer(block(8), 0);
    assembler.advance(2);
    for (const seq of [6, 7, 4, 0])
      expect(assembler.offer(block(seq), 3)).toMatchObject({
        result: 'refused',
        issue: { slug: 'too-late', status: 422 },
      });
    expect(assembler.offer(block(5), 3)).toEqual({ result: 'duplicate' });
    expect(assembler.offer(block(8), 3)).toEqual({ result: 'duplicate' });
  });

  it('lets the ack pass over however many blocks are refused, in whatever order', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0), 0);
    for (const seq of [3, 2, 1]) assembler.offer(block(seq, { rateHz: 1 }), 0);
    expect(assembler.ackSeq()).toBe(3);
    for (let seq = 4; seq <= 500; seq++) assembler.offer(block(seq, { rateHz: 1 }), 0);
    expect(assembler.ackSeq()).toBe(500);
    expect(assembler.deadlineS()).toBeUndefined();
    assembler.offer(block(501), 0);
    expect(seqs(events)).toEqual([0, 'gap 1+500', 501]);
  });

  it('keeps every index exact, whatever a board’s clock says', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0, { timeS: 0 }), 0);
    for (let i = 1; i <= 100; i++) {
      assembler.offer(block(2 * i, { timeS: i * 2e11 }), 0);
      assembler.advance(2);
    }
    const starts = events.flatMap((event) => ('startIndex' in event ? [event.startIndex] : []));
    expect(new Set(starts).size).toBe(101);
    expect(Math.max(...starts)).toBeLessThan(2 ** 51);
  });

  it('measures a gap by the board’s clock where both neighbours carry it', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0, { timeS: 5 }), 0);
    assembler.offer(block(3, { timeS: 5.0354 }), 0);
    assembler.advance(2);
    expect(events).toEqual([
      { seq: 0, startIndex: 0 },
      { lostSamples: 25, estimated: false, fromIndex: 10, fromSeq: 1, missingBlocks: 2 },
      { seq: 3, startIndex: 35 },
    ]);
  });

  it.each([
    ['no clock before', undefined, 9],
    ['no clock after', 9, undefined],
    ['a clock that went backwards', 9, 8],
    ['a clock beyond all reason', 9, 1e300],
  ])('estimates a gap with %s', (_, before, after) => {
    const { assembler, events } = setUp();
    assembler.offer(block(0, { timeS: before, length: 4 }), 0);
    assembler.offer(block(3, { timeS: after }), 0);
    assembler.advance(2);
    expect(events[1]).toEqual({
      lostSamples: 8,
      estimated: true,
      fromIndex: 4,
      fromSeq: 1,
      missingBlocks: 2,
    });
  });

  it('takes a jump of 2^31 without looping over it', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0), 0);
    assembler.offer(block(2 ** 31), 0);
    assembler.offer(block(2 ** 32 - 1), 0);
    assembler.advance(2);
    expect(seqs(events)).toEqual([
      0,
      `gap 1+${2 ** 31 - 1}`,
      2 ** 31,
      `gap ${2 ** 31 + 1}+${2 ** 31 - 2}`,
      2 ** 32 - 1,
    ]);
    expect(assembler.ackSeq()).toBe(2 ** 32 - 1);
    expect(Number.isSafeInteger(assembler.snapshot()!.nextIndex)).toBe(true);
  });

  it('holds at most 64 blocks and 64 refusals, whatever comes', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0), 0);
    for (let seq = 2; seq < 10_000; seq += 2) assembler.offer(block(seq), 0);
    expect(events.filter((event) => 'seq' in event).length).toBeGreaterThan(4999 - 64);
    for (let seq = 100_000; seq < 200_000; seq++) assembler.refuse(seq);
    expect(assembler.ackSeq()!).toBeLessThan(10_000);
  });

  it('does not wait for a block that was refused', () => {
    const { assembler, events } = setUp();
    assembler.offer(block(0), 0);
    assembler.offer(block(3), 0);
    assembler.refuse(1);
    expect(seqs(events)).toEqual([0]);
    expect(assembler.ackSeq()).toBe(1);
    assembler.refuse(2);
    expect(seqs(events)).toEqual([0, 'gap 1+2', 3]);
  });

  it('goes on after a restart: duplicates known, waiting blocks fed again', () => {
    const first = setUp();
    first.assembler.offer(block(5), 0);
    first.assembler.offer(block(8), 0);
    first.assembler.advance(2);
    first.assembler.offer(block(11), 3);
    const saved = JSON.parse(JSON.stringify(first.assembler.snapshot())) as AssemblerState;
    expect(saved.nextSeq).toBe(9);

    const second = setUp(saved);
    expect(second.assembler.offer(block(11), 100)).toEqual({ result: 'accepted' });
    expect(second.assembler.offer(block(8), 100)).toEqual({ result: 'duplicate' });
    expect(second.assembler.offer(block(6), 100)).toMatchObject({ issue: { slug: 'too-late' } });
    expect(second.assembler.freshSeq()).toBe(12);
    second.assembler.offer(block(9), 100);
    second.assembler.offer(block(10), 100);
    expect(second.events).toEqual([
      { seq: 9, startIndex: 40 },
      { seq: 10, startIndex: 50 },
      { seq: 11, startIndex: 60 },
    ]);
  });

  it('keeps what it must hold through `keep`, and only that', () => {
    const kept: number[] = [];
    const assembler = createAssembler<BlockHead>({
      keep: (early) => {
        kept.push(early.seq);
        return { ...early };
      },
      events: { block: () => undefined, gap: () => undefined },
    });
    for (const seq of [0, 1, 3, 2, 4]) assembler.offer(block(seq), 0);
    expect(kept).toEqual([3]);
  });

  it('any order within the window, with duplicates and losses, comes out as the clean sequence without the lost', () => {
    fc.assert(
      fc.property(
        fc.array(
          fc.record({
            length: fc.integer({ min: 1, max: 9 }),
            lost: fc.boolean(),
            late: fc.integer({ min: 0, max: 40 }),
            again: fc.boolean(),
          }),
          {
            minLength: 1,
            maxLength: 200,
          },
        ),
        fc.boolean(),
        (plan, clock) => {
          const lengths = plan.map(({ length }) => length);
          const starts = lengths.map((_, i) => lengths.slice(0, i).reduce((sum, length) => sum + length, 0));
          const make = (seq: number) =>
            block(seq, { length: lengths[seq], timeS: clock ? 3 + starts[seq]! / 1000 : undefined });
          // Each block moves back by fewer places than the window holds; the first stays first.
          const order = plan
            .map((step, seq) => ({ ...step, seq, place: seq === 0 ? -1 : seq + step.late }))
            .filter(({ seq, lost }) => seq === 0 || !lost)
            .sort((a, b) => a.place - b.place || a.seq - b.seq);
          const { assembler, events } = setUp();
          for (const { seq, again } of order) {
            expect(assembler.offer(make(seq), 0)).toEqual({ result: 'accepted' });
            if (again) expect(assembler.offer(make(seq), 0)).toEqual({ result: 'duplicate' });
          }
          assembler.advance(2);
          const held = order.map(({ seq }) => seq).sort((a, b) => a - b);
          const passed = events.filter((event) => 'seq' in event);
          expect(passed.map(({ seq }) => seq)).toEqual(held);
          if (clock)
            expect(passed.map(({ startIndex }) => startIndex)).toEqual(held.map((seq) => starts[seq]));
          expect(assembler.ackSeq()).toBe(held.at(-1));
          let next = 0;
          for (const event of events) {
            if ('seq' in event) {
              expect(event.startIndex).toBe(next);
              next += lengths[event.seq]!;
            } else {
              expect(event.fromIndex).toBe(next);
              expect(event.estimated).toBe(!clock);
              next += event.lostSamples;
            }
          }
        },
      ),
      { numRuns: 300 },
    );
  });
});
