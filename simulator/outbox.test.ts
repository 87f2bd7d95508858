import { describe, expect, it } from 'vitest';
import { createOutbox } from '@/simulator/outbox';

const block = (seq: number, stream = 'a', size = 10) => ({
  stream,
  seq,
  samples: 1,
  bytes: new Uint8Array(size),
});
const seqs = (blocks: { seq: number }[]) => blocks.map(({ seq }) => seq);

function filled(count: number, limits = { maxBlocks: 100, maxBytes: 1e6 }) {
  const outbox = createOutbox(limits);
  for (let seq = 0; seq < count; seq += 1) outbox.push(block(seq));
  return outbox;
}

describe('outbox', () => {
  it('hands each block out once, and all that is not acked again after a rewind', () => {
    const outbox = filled(5);
    expect(seqs(outbox.take(3, 1e6))).toEqual([0, 1, 2]);
    expect(outbox.ack('a', 1)).toBe(2);
    expect(seqs(outbox.take(10, 1e6))).toEqual([3, 4]);
    outbox.rewind();
    expect(seqs(outbox.take(10, 1e6))).toEqual([2, 3, 4]);
  });

  it('never drops on an ack what was not sent yet', () => {
    const outbox = filled(3);
    outbox.take(1, 1e6);
    outbox.ack('a', 2);
    expect(seqs(outbox.take(10, 1e6))).toEqual([1, 2]);
  });

  it('keeps an older stream when a newer one is acked', () => {
    const outbox = createOutbox({ maxBlocks: 10, maxBytes: 1e6 });
    outbox.push(block(7, 'old'));
    outbox.push(block(0, 'new'));
    outbox.take(10, 1e6);
    outbox.ack('new', 9);
    outbox.rewind();
    expect(outbox.take(10, 1e6).map(({ stream }) => stream)).toEqual(['old']);
  });

  it('gives the oldest up when full, by number and by bytes, and counts it', () => {
    const byNumber = filled(12, { maxBlocks: 8, maxBytes: 1e6 });
    expect([byNumber.waiting, byNumber.dropped]).toEqual([8, 4]);
    const byBytes = filled(12, { maxBlocks: 100, maxBytes: 55 });
    expect([byBytes.bytes, byBytes.dropped]).toEqual([50, 7]);
    expect(seqs(byBytes.take(1, 1e6))).toEqual([7]);
  });

  it('limits a batch by bytes, yet always hands one out', () => {
    const outbox = filled(4);
    expect(seqs(outbox.take(10, 25))).toEqual([0, 1]);
    expect(seqs(outbox.take(10, 5))).toEqual([2]);
  });
});
