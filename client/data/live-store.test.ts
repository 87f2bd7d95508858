import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { FakeLiveSocket } from '@/tests/fakes/fake-live-socket';
import { liveFrame } from '@/tests/fakes/live-frame';
import { ApiProblem } from '@/client/data/api-problem';
import { systemClock } from '@/client/data/clock';
import { lingerMs, LiveStore } from '@/client/data/live-store';
import { idleTimeoutMs } from '@/client/data/socket';

const wish = { rigId: 'a', ribbon: null, detail: false };

function lab() {
  const sockets: FakeLiveSocket[] = [];
  const frames: (() => void)[] = [];
  const token = vi.fn(async (_fresh: boolean) => 'token-1');
  const store = new LiveStore({
    open: () => {
      const socket = new FakeLiveSocket();
      sockets.push(socket);
      return socket;
    },
    clock: systemClock,
    random: () => 1,
    token,
    schedule: (run) => frames.push(run),
  });
  const settle = () => vi.advanceTimersByTimeAsync(0);
  const paint = () => frames.splice(0).forEach((run) => run());
  const last = () => sockets.at(-1) as FakeLiveSocket;
  const goLive = async () => {
    await settle();
    last().open();
    last().say({ type: 'welcome', expiresInS: 900 });
    paint();
  };
  const status = () => {
    paint();
    return store.getSnapshot().connection.status;
  };
  return { store, sockets, token, settle, paint, last, goLive, status };
}

beforeEach(() => {
  vi.useFakeTimers();
});
afterEach(() => {
  vi.useRealTimers();
});

describe('the live store', () => {
  it('opens no socket before anyone looks', async () => {
    const { store, sockets, settle, status } = lab();
    await settle();
    expect(sockets).toHaveLength(0);
    expect(status()).toBe('idle');
    store.watch(wish);
    await settle();
    expect(sockets).toHaveLength(1);
    expect(status()).toBe('connecting');
  });

  it('says hello with the token first, and what it watches after the welcome', async () => {
    const { store, last, settle } = lab();
    store.watch(wish);
    await settle();
    last().open();
    expect(last().sent).toEqual([{ type: 'hello', accessToken: 'token-1' }]);
    last().say({ type: 'welcome', expiresInS: 900 });
    expect(last().sent[1]).toEqual({ type: 'watch', rigs: [wish] });
  });

  it('sends one watch message for a wish that is changed, none for one that is the same', async () => {
    const { store, last, goLive, settle } = lab();
    const end = store.watch(wish);
    await goLive();
    end();
    const endSame = store.watch({ ...wish });
    await settle();
    expect(last().sent).toHaveLength(2);
    endSame();
    store.watch({ ...wish, detail: true });
    await settle();
    expect(last().sent).toHaveLength(3);
    expect(last().sent[2]).toMatchObject({ rigs: [{ detail: true }] });
  });

  it('tells its listeners once a frame, whatever came', async () => {
    const { store, last, goLive, paint } = lab();
    store.watch(wish);
    await goLive();
    const heard = vi.fn();
    store.subscribe(heard);
    const before = store.getSnapshot();
    for (let i = 0; i < 20; i += 1) last().say(liveFrame('a', { dropped: i }));
    expect(store.getSnapshot()).toBe(before);
    paint();
    expect(heard).toHaveBeenCalledTimes(1);
    expect(store.getSnapshot().rigs.get('a')?.frame?.dropped).toBe(19);
  });

  it('keeps the link from one screen to the next, and suspends after the last', async () => {
    const { store, sockets, goLive, status } = lab();
    const end = store.watch(wish);
    await goLive();
    end();
    await vi.advanceTimersByTimeAsync(lingerMs - 1);
    const endNext = store.watch({ ...wish, rigId: 'b' });
    await vi.advanceTimersByTimeAsync(lingerMs);
    expect(sockets).toHaveLength(1);
    endNext();
    await vi.advanceTimersByTimeAsync(lingerMs);
    expect(status()).toBe('idle');
    expect(sockets[0]?.closedByPage).toBe(true);
  });

  it('rests while the page is hidden and comes back when it is seen', async () => {
    const { store, sockets, last, goLive, status } = lab();
    store.watch(wish);
    await goLive();
    last().say(liveFrame('a'));
    store.setHidden(true);
    await vi.advanceTimersByTimeAsync(lingerMs);
    expect(status()).toBe('idle');
    expect(store.getSnapshot().rigs.get('a')?.stale).toBe(true);
    store.setHidden(false);
    await goLive();
    expect(sockets).toHaveLength(2);
    expect(status()).toBe('live');
  });

  it('tries again with growing waits, and at once when asked', async () => {
    const { store, sockets, last, settle, status } = lab();
    store.watch(wish);
    await settle();
    last().lose(1006);
    expect(status()).toBe('waiting');
    await vi.advanceTimersByTimeAsync(499);
    expect(sockets).toHaveLength(1);
    await vi.advanceTimersByTimeAsync(1);
    expect(sockets).toHaveLength(2);
    last().lose(1006);
    await vi.advanceTimersByTimeAsync(999);
    expect(sockets).toHaveLength(2);
    status();
    const { connection } = store.getSnapshot();
    if (connection.status === 'waiting') connection.retry();
    await settle();
    expect(sockets).toHaveLength(3);
  });

  it('takes silence for a dead link', async () => {
    const { store, last, goLive, status } = lab();
    store.watch(wish);
    await goLive();
    await vi.advanceTimersByTimeAsync(idleTimeoutMs - 1);
    expect(status()).toBe('live');
    last().say(liveFrame('a'));
    await vi.advanceTimersByTimeAsync(idleTimeoutMs - 1);
    expect(status()).toBe('live');
    await vi.advanceTimersByTimeAsync(1);
    expect(status()).toBe('waiting');
  });

  it('asks for a fresh token once when the hub refuses the one it has', async () => {
    const { store, token, last, settle, status } = lab();
    store.watch(wish);
    await settle();
    last().lose(4401);
    await settle();
    expect(token.mock.calls).toEqual([[false], [true]]);
    last().lose(4401);
    expect(status()).toBe('waiting');
  });

  it('fails where the session has ended, and comes back after a sign-in', async () => {
    const { store, token, sockets, goLive, settle, status } = lab();
    const ended = await ApiProblem.fromResponse(new Response(null, { status: 401 }));
    token.mockRejectedValueOnce(ended);
    store.watch(wish);
    await settle();
    expect(status()).toBe('failed');
    expect(sockets).toHaveLength(0);
    store.tokenRenewed();
    await goLive();
    expect(status()).toBe('live');
  });

  it('waits where the token cannot be fetched for want of a network', async () => {
    const { store, token, settle, status } = lab();
    token.mockRejectedValueOnce(ApiProblem.offline());
    store.watch(wish);
    await settle();
    expect(status()).toBe('waiting');
  });

  it('hands a renewed token to the hub on the open link', async () => {
    const { store, token, last, goLive, settle } = lab();
    store.watch(wish);
    await goLive();
    token.mockResolvedValueOnce('token-2');
    store.tokenRenewed();
    await settle();
    expect(last().sent.at(-1)).toEqual({ type: 'hello', accessToken: 'token-2' });
  });

  it('passes over messages that it cannot read', async () => {
    const { store, last, goLive, paint } = lab();
    store.watch(wish);
    await goLive();
    last().say('{');
    last().say({ type: 'weather' });
    last().say({ ...liveFrame('a'), live: { state: 'asleep' } });
    paint();
    expect(store.getSnapshot().rigs.size).toBe(0);
  });
});
