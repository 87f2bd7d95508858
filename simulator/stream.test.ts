import { decode } from 'cbor-x';
import { describe, expect, it } from 'vitest';
import { createRig, type RigSpec } from '@/simulator/rig-model';
import { streamRig, type StreamOptions } from '@/simulator/stream';
import type { Connect, SocketEvents } from '@/simulator/ws-sender';
import { createFakeClock } from '@/tests/fakes/simulator-clock';

const spec: RigSpec = {
  rateHz: 1000,
  motion: { startRpm: 60, segments: [{ durationS: 10, toRpm: 60 }] },
  wheel: { kind: 'toothed', positions: 12, pitchMm: 8, modulationMt: 40 },
  gapMm: 1,
  channels: [
    {
      name: 'A',
      placeDeg: 0,
      sensor: { kind: 'linear', quiescentV: 1.6, sensitivityMvPerMt: 25, lowRailV: 0, highRailV: 3.3 },
      electronics: { noiseRmsV: 0.01 },
    },
  ],
  adc: { kind: 'codes', bits: 12, voltsPerCode: 3.3 / 4096, codeOffset: 0 },
  faults: [],
};

type Message = { stream: string; seq: number; time: number; samples: { A: Int16Array } };

/** A hub that a test can make deaf: it takes messages, acks when told to, and can cut the line. */
function fakeHub() {
  const received: Message[] = [];
  const connections: { events: SocketEvents; open: boolean }[] = [];
  let acking = true;
  const connect: Connect = (_url, _key, events) => {
    const connection = { events, open: true };
    connections.push(connection);
    queueMicrotask(() => events.onOpen());
    return {
      bufferedAmount: 0,
      send(data) {
        const message = decode(data as Uint8Array) as Message;
        received.push(message);
        if (acking) events.onMessage(JSON.stringify({ ack: { stream: message.stream, seq: message.seq } }));
      },
      close: () => events.onClose(1000, undefined, ''),
    };
  };
  return {
    connect,
    received,
    connections,
    ackNothing() {
      acking = false;
    },
    ackAgain() {
      acking = true;
    },
    cut: () => connections.at(-1)?.events.onClose(1006, undefined, 'cut'),
  };
}

function start(options: Partial<StreamOptions> & Pick<StreamOptions, 'clock'>, rigSpec = spec) {
  let boots = 0;
  return streamRig({
    rig: createRig(rigSpec, 1),
    baseUrl: 'http://hub.example',
    key: 'k',
    transport: 'ws',
    format: 'cbor',
    random: () => 0.5,
    newStreamName: () => `boot-${(boots += 1)}`,
    ...options,
  });
}

function joined(messages: Message[]): number[] {
  return messages.flatMap((message) => Array.from(message.samples.A));
}

describe('streaming', () => {
  it('loses nothing and keeps to the absolute schedule on a machine that wakes late', async () => {
    let wakes = 0;
    const clock = createFakeClock(() => (wakes += 1) % 7);
    const hub = fakeHub();
    const stream = start({ clock, connect: hub.connect });
    await clock.runUntil(20_000);
    // 500 blocks of 40 ms; lateness of a few ms at each must not add up to a block.
    expect(hub.received.length).toBeGreaterThanOrEqual(499);
    expect(hub.received.map(({ seq }) => seq)).toEqual(hub.received.map((_, i) => i));
    expect(joined(hub.received)).toEqual(
      Array.from(createRig(spec, 1).block(0, hub.received.length * 40)[0]!),
    );
    await stream.stop();
  });

  it('ends after the seconds asked for, with every block acked', async () => {
    const clock = createFakeClock();
    const hub = fakeHub();
    const stream = start({ clock, connect: hub.connect, seconds: 2 });
    await clock.runUntil(3000);
    expect(await stream.done).toMatchObject({ blocks: 50, samples: 2000, unacked: 0, dropped: 0 });
  });

  it('sends what was not acked again after a reconnect', async () => {
    const clock = createFakeClock();
    const hub = fakeHub();
    const stream = start({ clock, connect: hub.connect });
    await clock.runUntil(400);
    hub.ackNothing();
    await clock.runUntil(1000);
    hub.cut();
    hub.ackAgain();
    await clock.runUntil(4000);
    const seqs = hub.received.map(({ seq }) => seq);
    expect(hub.connections).toHaveLength(2);
    expect(seqs.slice(0, 25)).toEqual(Array.from({ length: 25 }, (_, i) => i));
    // 10 were acked, 15 were not: those come again, in order, and then the rest.
    expect(seqs.slice(25)).toEqual(Array.from({ length: seqs.length - 25 }, (_, i) => i + 10));
    expect(seqs.at(-1)).toBeGreaterThanOrEqual(98);
    await stream.stop();
  });

  it('backs off further each time while the hub is away, and gives up on a refused key', async () => {
    const clock = createFakeClock();
    const waits: number[] = [];
    let attempts = 0;
    const connect: Connect = (_url, _key, events) => {
      attempts += 1;
      const refused = attempts > 4;
      queueMicrotask(() => events.onClose(1006, refused ? 403 : undefined, 'away'));
      return { bufferedAmount: 0, send: () => undefined, close: () => undefined };
    };
    const stream = start({
      clock,
      connect,
      onEvent: (event) => (event.kind === 'retry' ? waits.push(event.afterMs) : undefined),
    });
    await clock.runUntil(60_000);
    expect(waits).toEqual([312.5, 625, 1250, 2500]);
    expect((await stream.done).endedBecause).toContain('403');
    expect(attempts).toBe(5);
  });

  it('takes a new name, sequence and time after a restart, and leaves lost blocks out', async () => {
    const clock = createFakeClock();
    const hub = fakeHub();
    const faults: RigSpec['faults'] = [
      { kind: 'lost-blocks', beginS: 0.2, endS: 0.28 },
      { kind: 'restart', beginS: 0.6, endS: 1 },
    ];
    const stream = start({ clock, connect: hub.connect, seconds: 2 }, { ...spec, faults });
    await clock.runUntil(3000);
    await stream.done;
    const first = hub.received.filter((message) => message.stream === 'boot-1');
    const second = hub.received.filter((message) => message.stream === 'boot-2');
    expect(first.map(({ seq }) => seq)).toEqual([0, 1, 2, 3, 4, 7, 8, 9, 10, 11, 12, 13, 14]);
    expect(first.map(({ time }) => time)[5]).toBeCloseTo(0.28, 12);
    expect(second[0]).toMatchObject({ seq: 0, time: 0 });
    expect(joined(second)).toEqual(Array.from(createRig(spec, 1).block(1000, 1000)[0]!));
  });
});

describe('streaming by POST', () => {
  it('sends again what met an error, and batches what piled up', async () => {
    const clock = createFakeClock();
    const bodies: Message[][] = [];
    const statuses = [202, 503, 429, 202];
    const stream = start({
      clock,
      transport: 'http',
      seconds: 2,
      post: (url, headers, body) => {
        expect(url).toBe('http://hub.example/ingest/v1/samples');
        expect(headers.Authorization).toBe('Bearer k');
        const message = decode(body) as Message | Message[];
        bodies.push(Array.isArray(message) ? message : [message]);
        const status = statuses[bodies.length - 1] ?? 202;
        return Promise.resolve({ status, retryAfter: status === 429 ? '0.5' : null, body: '{}' });
      },
    });
    await clock.runUntil(4000);
    expect(await stream.done).toMatchObject({ blocks: 50, unacked: 0 });
    const accepted = bodies.filter((_, i) => (statuses[i] ?? 202) === 202).flat();
    expect(accepted.map(({ seq }) => seq)).toEqual(Array.from({ length: 50 }, (_, i) => i));
    expect(bodies[3]!.length).toBeGreaterThan(10);
  });

  it('keeps the good blocks of a batch that was refused as a whole', async () => {
    const clock = createFakeClock();
    const kept: number[] = [];
    let first = true;
    const stream = start({
      clock,
      transport: 'http',
      seconds: 0.4,
      post: (_url, _headers, body) => {
        const message = decode(body) as Message | Message[];
        const batch = Array.isArray(message) ? message : [message];
        if (first) {
          first = false;
          return Promise.resolve({ status: 503, retryAfter: '0.3', body: '' });
        }
        if (batch.some(({ seq }) => seq === 3))
          return Promise.resolve({ status: 422, retryAfter: null, body: '{}' });
        kept.push(...batch.map(({ seq }) => seq));
        return Promise.resolve({ status: 202, retryAfter: null, body: '{}' });
      },
    });
    await clock.runUntil(2000);
    await stream.done;
    expect(kept).toEqual([0, 1, 2, 4, 5, 6, 7, 8, 9]);
  });
});
