import { decode, Encoder } from 'cbor-x';
import { describe, expect, it } from 'vitest';
import { createMemorySink } from '../memory-sink';
import { createStreamSession } from './websocket';

const encoder = new Encoder({ useRecords: false });

/** A clock that runs only when told. */
function createFakeTimers() {
  let ms = 0;
  let tasks: { atMs: number; run: () => void }[] = [];
  return {
    nowMs: () => ms,
    after(delayMs: number, run: () => void) {
      const task = { atMs: ms + delayMs, run };
      tasks.push(task);
      return () => {
        tasks = tasks.filter((other) => other !== task);
      };
    },
    run(forMs: number) {
      const endMs = ms + forMs;
      for (;;) {
        const next = tasks.filter(({ atMs }) => atMs <= endMs).sort((a, b) => a.atMs - b.atMs)[0];
        if (!next) break;
        tasks = tasks.filter((task) => task !== next);
        ms = Math.max(ms, next.atMs);
        next.run();
      }
      ms = endMs;
    },
    count: () => tasks.length,
  };
}

function setUp(limits: { maxBytesInFlight?: number; maxBytesUnsent?: number } = {}) {
  const timers = createFakeTimers();
  const sink = createMemorySink({ channels: ['A'], nowS: () => timers.nowMs() / 1000 });
  const sent: (string | Uint8Array)[] = [];
  const log: string[] = [];
  let unsent = 0;
  const socket = {
    send: (data: string | Uint8Array) => sent.push(data),
    bufferedBytes: () => unsent,
    ping: () => log.push('ping'),
    pause: () => log.push('pause'),
    resume: () => log.push('resume'),
    close: (code: number) => log.push(`close ${code}`),
  };
  const session = createStreamSession({ rigId: 'rig-1', sink, socket, timers, ...limits });
  const text = (value: unknown): void =>
    session.message(Buffer.from(typeof value === 'string' ? value : JSON.stringify(value)), false);
  const binary = (value: unknown): void => session.message(encoder.encode(value), true);
  const messages = (): unknown[] =>
    sent.splice(0).map((data) => (typeof data === 'string' ? JSON.parse(data) : decode(data)) as unknown);
  const setUnsent = (bytes: number): void => {
    unsent = bytes;
  };
  return { timers, sink, session, text, binary, messages, sent, log, setUnsent };
}

const block = (seq: number, fields: object = {}) => ({
  stream: 's',
  seq,
  rate: 1000,
  samples: { A: [1, 2] },
  ...fields,
});
const ack = (seq: number, stream = 's') => ({ ack: { stream, seq } });

describe('WebSocket session', () => {
  it('acks after the commit, merged, within 250 ms', () => {
    const { timers, sink, text, messages } = setUp();
    for (let seq = 0; seq < 20; seq++) text(block(seq));
    timers.run(1000);
    expect(messages()).toEqual([]);
    sink.commit();
    text(block(20));
    sink.commit();
    timers.run(250);
    expect(messages()).toEqual([ack(20)]);
    timers.run(10_000);
    expect(messages()).toEqual([]);
  });

  it('answers in the encoding of the last message', () => {
    const { timers, sink, text, binary, sent, messages } = setUp();
    text(block(0));
    sink.commit();
    timers.run(250);
    expect(typeof sent[0]).toBe('string');
    binary(block(1));
    sink.commit();
    timers.run(250);
    expect(Buffer.from(sent[1] as Uint8Array).toString('hex')).toBe(
      'a16361636b' + 'a2' + '6673747265616d' + '6173' + '63736571' + '01',
    );
    expect(messages()).toEqual([ack(0), ack(1)]);
  });

  it('acks each stream, and only up to what is missing', () => {
    const { timers, sink, text, messages } = setUp();
    text([block(0), block(1), block(3), block(7, { stream: 'r' })]);
    sink.commit();
    timers.run(250);
    expect(messages()).toEqual([ack(1), ack(7, 'r')]);
    // The loss is declared by time alone: the ack follows without another block.
    sink.advance(2.1);
    timers.run(250);
    expect(messages()).toEqual([ack(3)]);
  });

  it('acks again what is sent again', () => {
    const { timers, sink, text, messages } = setUp();
    text([block(0), block(1)]);
    sink.commit();
    timers.run(250);
    messages();
    text([block(0), block(1)]);
    sink.commit();
    timers.run(250);
    expect(messages()).toEqual([ack(1)]);
    expect(sink.blocks).toHaveLength(2);
  });

  it('does not ack streams of other connections', () => {
    const { timers, sink, session, messages } = setUp();
    sink.offer(
      'rig-1',
      {
        stream: 'other',
        seq: 0,
        rateHz: 1,
        timeS: undefined,
        length: 1,
        channels: [{ name: 'A', samples: Float64Array.of(1) }],
      },
      0,
      () => undefined,
    );
    sink.commit();
    timers.run(250);
    expect(messages()).toEqual([]);
    session.closed();
  });

  it('answers bad input with problems and stays open', () => {
    const { timers, sink, text, messages, log } = setUp();
    text(block(0));
    text('{"stream":');
    text([block(1, { rate: 'x' }), block(2), block(3, { samples: { C: [1] } }), block(4, { rate: 5 })]);
    sink.commit();
    timers.run(250);
    const problem = (slug: string, fields: object) => ({
      problem: expect.objectContaining({ type: `urn:turnmark:problem:${slug}`, ...fields }) as unknown,
    });
    expect(messages()).toEqual([
      problem('unreadable', { status: 400, at: 'line 1, column 11' }),
      problem('invalid', { status: 422, stream: 's', seq: 1, pointer: '/0/rate' }),
      problem('invalid', { stream: 's', seq: 3, pointer: '/samples/C' }),
      problem('stream-changed', { stream: 's', seq: 4 }),
      ack(4),
    ]);
    expect(log).toEqual([]);
    expect(sink.blocks.map((entry) => entry.block.seq)).toEqual([0, 2]);
  });

  it('stops reading while too much is not stored, and reads on after the commit', () => {
    const { sink, binary, log } = setUp({ maxBytesInFlight: 150 });
    binary(block(0));
    expect(log).toEqual([]);
    binary([block(1), block(2), block(3)]);
    expect(log).toEqual(['pause']);
    sink.commit();
    expect(log).toEqual(['pause', 'resume']);
    expect(sink.blocks).toHaveLength(4);
    binary(block(4));
    sink.commit();
    expect(log).toEqual(['pause', 'resume']);
  });

  it('counts refused blocks as done', () => {
    const { sink, text, log } = setUp({ maxBytesInFlight: 10 });
    text(block(0, { rate: -1 }));
    expect(log).toEqual([]);
    text([block(0), block(1, { rate: -1 }), block(2)]);
    sink.commit();
    expect(log).toEqual(['pause', 'resume']);
  });

  it('stops reading from a sender that does not take its answers', () => {
    const { timers, text, log, setUnsent } = setUp({ maxBytesUnsent: 100 });
    setUnsent(101);
    text('nonsense');
    expect(log).toEqual(['pause']);
    timers.run(1000);
    setUnsent(50);
    timers.run(100);
    expect(log).toEqual(['pause', 'resume']);
  });

  it('pings, and closes after 60 s with neither a block nor a pong', () => {
    const { timers, session, text, log } = setUp();
    timers.run(59_000);
    session.pong();
    timers.run(59_000);
    text(block(0));
    timers.run(30_000);
    text('nonsense is no block');
    timers.run(29_999);
    expect(log).toEqual(new Array<string>(8).fill('ping'));
    timers.run(1);
    expect(log.at(-1)).toBe('close 4408');
    expect(timers.count()).toBe(0);
  });

  it('does not take its own pause for the sender’s silence', () => {
    const { timers, sink, text, log } = setUp({ maxBytesInFlight: 10 });
    text(block(0));
    timers.run(300_000);
    expect(log.filter((entry) => entry.startsWith('close'))).toEqual([]);
    sink.commit();
    timers.run(59_999);
    expect(log.filter((entry) => entry.startsWith('close'))).toEqual([]);
    timers.run(1);
    expect(log.at(-1)).toBe('close 4408');
  });

  it.each([
    ['keyRevoked', 4403],
    ['hubStopping', 1013],
  ] as const)('%s closes with %i, telling first what is acked', (act, code) => {
    const { timers, sink, session, text, messages, log } = setUp();
    text(block(0));
    sink.commit();
    session[act]();
    expect(messages()).toEqual([ack(0)]);
    expect(log).toEqual([`close ${code}`]);
    text(block(1));
    session[act]();
    sink.commit();
    timers.run(100_000);
    expect(messages()).toEqual([]);
    expect(sink.blocks).toHaveLength(1);
    expect(timers.count()).toBe(0);
  });

  it('closes with 1009 on a message that is too large', () => {
    const { session, log } = setUp();
    session.message(new Uint8Array(1024 * 1024 + 1), true);
    expect(log).toEqual(['close 1009']);
  });

  it('sends a sender away for now when the spool cannot store', () => {
    const { sink, text, messages, log } = setUp();
    sink.fail('The disk is full.');
    text(block(0));
    sink.commit();
    expect(messages()).toMatchObject([
      { problem: { type: 'urn:turnmark:problem:spool-unavailable', status: 503, seq: 0 } },
    ]);
    expect(log).toEqual(['close 1013']);
  });

  it('remembers a bounded number of streams', () => {
    const { timers, sink, text, messages } = setUp();
    for (let i = 0; i < 1000; i++) text(block(0, { stream: `s${i}` }));
    sink.commit();
    timers.run(250);
    expect(messages()).toHaveLength(1000);
    text(block(1, { stream: 's0' }));
    sink.commit();
    timers.run(250);
    expect(messages()).toEqual([ack(1, 's0')]);
  });
});
