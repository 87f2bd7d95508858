import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { openDatabases } from '@/db/open';
import type { Databases } from '@/db/open';
import type { Spool } from '@/db/spool-types';
import { StorageUnavailableError } from '@/db/errors';
import { setup, settings } from '@/db/test-support/rig';
import type { Block } from '@/ingest/block';
import type { BlockOutcome } from '@/ingest/block-sink';
import { createHub } from '@/server/hub/hub';
import type { RunningHub } from '@/server/hub/hub';

const rig = { id: 'r', setup, settings, settingsVersion: 1 };
const lookbackS = 600;
const silent = { warn: () => undefined, error: () => undefined };

let databases: Databases;
let hub: RunningHub;

function start(spool: Spool = databases.spool): RunningHub {
  return createHub({
    spool,
    rigs: [rig, { ...rig, id: 'other' }],
    lookbackS,
    nowMs: () => Date.now(),
    log: silent,
  });
}

beforeEach(() => {
  vi.useFakeTimers();
  databases = openDatabases({ dataDir: ':memory:', durability: 'normal' });
  hub = start();
});

afterEach(() => {
  hub.close();
  databases.close();
  vi.useRealTimers();
});

type Fields = { rateHz?: number; timeS?: number; names?: string[]; length?: number; rigId?: string };

function offer(stream: string, seq: number, fields: Fields = {}): BlockOutcome['result'][] {
  const { rateHz = 1000, timeS, names = ['A', 'B'], length = 10, rigId = 'r' } = fields;
  const channels = names.map((name) => ({ name, samples: new Int16Array(length).fill(seq) }));
  const block: Block = { stream, seq, rateHz, timeS, length, channels };
  const results: BlockOutcome['result'][] = [];
  hub.offer(rigId, block, 0, ({ result }) => results.push(result));
  return results;
}

const settle = () => vi.advanceTimersByTimeAsync(100);

describe('the hub', () => {
  it('makes known that the ack position passed over a refused block, though nothing else comes', async () => {
    const moved: (number | undefined)[] = [];
    offer('s', 0);
    await settle();
    hub.watchAcks('r', (stream) => moved.push(hub.ackPosition('r', stream)));
    expect(offer('s', 1, { rateHz: 7 })).toEqual(['refused']);
    await settle();
    expect(moved).toEqual([1]);
  });

  it('refuses a channel that was taken from the rig, and takes the stream again once it is back', async () => {
    offer('s', 0);
    await settle();
    hub.rigSaved({ ...rig, setup: { ...setup, channels: setup.channels.slice(0, 1) } });
    expect(offer('s', 1)).toEqual(['refused']);
    const held = offer('s', 0);
    await settle();
    expect(held).toEqual(['duplicate']);
    hub.rigSaved(rig);
    const back = offer('s', 2);
    await settle();
    expect([back, hub.ackPosition('r', 's')]).toEqual([['accepted'], 2]);
  });

  it('draws what comes after a changed scale by that scale', async () => {
    offer('s', 3);
    hub.rigSaved({
      ...rig,
      setup: { ...setup, channels: setup.channels.map((c) => ({ ...c, voltsPerCode: 0.5 })) },
    });
    offer('s', 4);
    await settle();
    const ribbon = hub.ribbon('r', { columns: 5, spanS: 0.005, anchor: 'now' });
    expect(ribbon?.lanes[0]?.max.filter((v) => v !== null)).toContain(2);
  });

  it('sets sequence numbers aside also before a stream has its first block', () => {
    expect(hub.reserveSeqs('r', 'post', 20)).toBe(0);
    offer('post', 0);
    expect(hub.reserveSeqs('r', 'post', 5)).toBe(20);
    expect(hub.reserveSeqs('r', 'new', 3)).toBe(0);
    expect(hub.reserveSeqs('r', 'new', 3)).toBe(3);
  });

  it('drops old blocks as fast as many rigs write them', async () => {
    for (let i = 0; i < 40; i++) {
      for (let s = 0; s < 30; s++) offer(`s${s}`, i);
      await settle();
    }
    const id = databases.spool.newestStream('r')!.streamId;
    await vi.advanceTimersByTimeAsync((lookbackS + 3) * 1000);
    expect(databases.spool.oldestIndex(id)).toBeNull();
    expect(databases.spool.size().freeBytes).toBeGreaterThan(0);
    const left = databases.spool
      .streamsOf('r')
      .filter((s) => databases.spool.oldestIndex(s.streamId) !== null);
    expect(left).toEqual([]);
  });

  it('says where a stream stands after a restart, before the next block of it', async () => {
    offer('s', 0, { length: 500 });
    await settle();
    hub.close();
    hub = start();
    expect(hub.live('r')).toMatchObject({ stream: 's', streamS: 0.5, rates: { declaredHz: 1000 } });
    offer('s', 1, { length: 500 });
    expect(hub.live('r')).toMatchObject({ streamS: 1 });
  });

  it('takes a stream anew that was opened and had lost all it had', async () => {
    offer('s', 5);
    // Killed before the commit.
    vi.clearAllTimers();
    hub = start();
    const taken = offer('s', 0, { names: ['A'], rateHz: 50 });
    await settle();
    expect(taken).toEqual(['accepted']);
    expect(databases.spool.findStream('r', 's')).toMatchObject({
      channels: ['A'],
      rateHz: 50,
      nextIndex: 10,
    });
  });

  it('goes on for other rigs when one is deleted with blocks on their way', async () => {
    const waiting = offer('s', 0);
    const other = offer('s', 0, { rigId: 'other' });
    hub.rigDeleted('r');
    databases.spool.purge(0, 64, []);
    await settle();
    expect([waiting, other]).toEqual([['unavailable'], ['accepted']]);
    expect(offer('s', 1)).toEqual(['unavailable']);
    expect(hub.live('r')).toBeNull();
  });

  it('bounds what may wait for blocks before it, and loses nothing by it', async () => {
    const big = { length: 65_536, names: ['A', 'B'] };
    for (let s = 0; s < 6; s++) {
      offer(`s${s}`, 0, big);
      for (let seq = 2; seq < 62; seq++) offer(`s${s}`, seq, big);
      await settle();
    }
    const refused = offer('s5', 62, big);
    await settle();
    expect(refused).toEqual(['unavailable']);
    const missing = offer('s0', 1, big);
    await settle();
    expect(missing).toEqual(['accepted']);
    await vi.advanceTimersByTimeAsync(2_500);
    const again = offer('s5', 62, big);
    await settle();
    expect(again).toEqual(['accepted']);
  });
});

describe('a spool that cannot store', () => {
  function failing(fails: (streams: readonly { streamId: number }[]) => Error | null): Spool {
    return {
      ...databases.spool,
      commit(batch) {
        const error = fails(batch.streams);
        if (error !== null) throw error;
        databases.spool.commit(batch);
      },
    };
  }

  it('is said to Keep as what it is', async () => {
    hub.close();
    hub = start(failing(() => new StorageUnavailableError('full', 'The disk is full.')));
    offer('s', 0);
    await expect(hub.planKeep('r', { lastSeconds: 1 })).rejects.toBeInstanceOf(StorageUnavailableError);
    hub.rigDeleted('r');
  });

  it('takes the rest where it will not take the rows of one stream', async () => {
    hub.close();
    let bad: number | undefined;
    hub = start(
      failing((streams) => (streams.some((s) => s.streamId === bad) ? new Error('no such row') : null)),
    );
    offer('bad', 0);
    await settle();
    bad = databases.spool.findStream('r', 'bad')!.streamId;
    const [spoiled, good] = [offer('bad', 1), offer('good', 0)];
    await settle();
    expect([spoiled, good]).toEqual([['unavailable'], ['accepted']]);
    const other = offer('s', 0, { rigId: 'other' });
    await settle();
    expect(other).toEqual(['accepted']);
    bad = undefined;
    const again = offer('bad', 1);
    await settle();
    expect([again, hub.ackPosition('r', 'bad')]).toEqual([['accepted'], 1]);
  });

  it('says that a board started anew, how long nothing came, and how often, but not of single posts', async () => {
    const found = () => hub.live('r')?.findings.filter(({ code }) => code === 'board-restart') ?? [];
    offer('boot-1', 0);
    await settle();
    expect(found()).toEqual([]);
    await vi.advanceTimersByTimeAsync(4_900);
    offer('boot-2', 0);
    await settle();
    expect(found()).toMatchObject([{ severity: 'warn', from: 0, evidence: { awayS: 5, restarts: 1 } }]);
    for (const name of ['boot-3', 'boot-4']) offer(name, 0);
    await settle();
    expect(found()).toMatchObject([{ severity: 'fault', evidence: { restarts: 3 } }]);
    offer('post-1', 0);
    offer('post-2', 0);
    await settle();
    expect(found()).toEqual([]);
  });

  it('says that a board samples faster than it declares, once a minute has shown it', async () => {
    for (let k = 0; k < 700; k += 1) {
      offer('fast', k, { length: 101 });
      await vi.advanceTimersByTimeAsync(100);
    }
    const drift = hub.live('r')?.findings.find(({ code }) => code === 'clock-drift');
    expect(drift?.severity).toBe('fault');
    expect(Number(drift?.evidence.driftPpm)).toBeGreaterThan(9_000);
    expect(Number(drift?.evidence.driftPpm)).toBeLessThan(11_000);
  });
});
