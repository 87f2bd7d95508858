import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { liveFrame } from '@/tests/fakes/live-frame';
import { systemClock } from '@/client/data/clock';
import { LiveRigs, staleAfterMs } from '@/client/data/live-rigs';
import { noLiveRig, secondsSince } from '@/client/data/live-types';

beforeEach(() => {
  vi.useFakeTimers({ now: 1_000_000 });
});
afterEach(() => {
  vi.useRealTimers();
});

describe('LiveRigs', () => {
  it('calls a rig stale when its frames stop, and only that one', async () => {
    const changed = vi.fn();
    const rigs = new LiveRigs(systemClock, changed);
    rigs.take(liveFrame('a'));
    await vi.advanceTimersByTimeAsync(1_500);
    rigs.take(liveFrame('b'));
    await vi.advanceTimersByTimeAsync(staleAfterMs - 1_500);
    expect(rigs.snapshot().get('a')?.stale).toBe(true);
    expect(rigs.snapshot().get('b')?.stale).toBe(false);
    await vi.advanceTimersByTimeAsync(1_500);
    expect(rigs.snapshot().get('b')?.stale).toBe(true);
    expect(changed).toHaveBeenCalledTimes(4);
  });

  it('is live again with the next frame', async () => {
    const rigs = new LiveRigs(systemClock, () => undefined);
    rigs.take(liveFrame('a'));
    rigs.allStale();
    expect(rigs.snapshot().get('a')?.stale).toBe(true);
    rigs.take(liveFrame('a'));
    expect(rigs.snapshot().get('a')?.stale).toBe(false);
    await vi.advanceTimersByTimeAsync(staleAfterMs);
    expect(rigs.snapshot().get('a')?.stale).toBe(true);
  });

  it('keeps what a frame leaves out', () => {
    const rigs = new LiveRigs(systemClock, () => undefined);
    const wheelFace = { numbered: false, positions: [], angleDeg: 12 };
    rigs.take(liveFrame('a', { wheelFace, speedHistory: { agoS: [1], rpm: [1500] } }));
    rigs.take(liveFrame('a'));
    expect(rigs.snapshot().get('a')?.frame?.wheelFace).toEqual(wheelFace);
    expect(rigs.snapshot().get('a')?.speedHistory).toEqual({ agoS: [1], rpm: [1500] });
    rigs.take(liveFrame('a', { wheelFace: null }));
    expect(rigs.snapshot().get('a')?.frame?.wheelFace).toBeNull();
  });

  it('says that a rig is gone and forgets those not asked for', () => {
    const rigs = new LiveRigs(systemClock, () => undefined);
    rigs.take(liveFrame('a'));
    rigs.take(liveFrame('b'));
    rigs.remove('a');
    expect(rigs.snapshot().get('a')).toMatchObject({ gone: true, frame: null });
    rigs.keepOnly(new Set(['b']));
    expect([...rigs.snapshot().keys()]).toEqual(['b']);
  });
});

describe('secondsSince', () => {
  const frame = liveFrame('a', { at: '2026-03-01T10:00:00.000Z' });

  it("counts by the hub's clock up to the frame and by this device's after it", () => {
    const rig = { ...noLiveRig, frame, receivedAtMs: 5_000 };
    expect(secondsSince('2026-03-01T09:59:57.500Z', rig, 6_000)).toBe(3.5);
  });

  it('is null where nothing is known', () => {
    expect(secondsSince(null, { ...noLiveRig, frame, receivedAtMs: 5_000 }, 6_000)).toBeNull();
    expect(secondsSince('2026-03-01T09:59:57.500Z', noLiveRig, 6_000)).toBeNull();
  });
});
