import { describe, expect, it } from 'vitest';
import { rig as rigShape, rigInput, type Rig, type RigKey } from '@/server/contract';
import { liveFrame } from '@/tests/fakes/live-frame';
import { noLiveRig, type LiveRig } from '@/client/data/live-types';
import { checklist, mergeChecks, rateWords, type CheckId } from '@/client/screens/connect/checklist';

const rig: Rig = rigShape.parse({
  ...rigInput.parse({
    name: 'Vent winch',
    sensing: 'quadrature',
    wheel: { pulsesPerTurn: 24 },
    channels: [
      { name: 'A', role: 'A', maxInputV: 3.3 },
      { name: 'B', role: 'B', maxInputV: 3.3 },
    ],
    expectedDirection: 'forward',
    ratedRpm: 1500,
  }),
  id: 'r1',
  createdAt: '2026-03-01T09:00:00Z',
});
const key: RigKey = {
  id: 'k1',
  name: 'board',
  createdAt: '2026-03-01T09:00:00Z',
  createdBy: 'Ada',
  lastUsedAt: null,
};
const channel = (name: string, edges = 10, lowV = 0.4, highV = 2.9) => ({
  channel: name,
  lowV,
  highV,
  operateV: 1.9,
  releaseV: 1.4,
  noiseV: 0.01,
  duty: 0.5,
  edges,
});

type LiveChange = Partial<NonNullable<LiveRig['frame']>['live']>;
function seen(change: LiveChange): LiveRig {
  const frame = liveFrame('r1');
  const live = { ...frame.live, channels: [channel('A'), channel('B')], ...change };
  return { ...noLiveRig, frame: { ...frame, live }, receivedAtMs: 0 };
}
const of = (id: CheckId, change: LiveChange) => checklist(rig, [key], seen(change)).find((c) => c.id === id);

describe('the checklist', () => {
  it('waits for everything before the first block', () => {
    const states = checklist(rig, [key], noLiveRig).map((c) => c.state);
    expect(states).toEqual(Array(6).fill('waiting'));
  });

  it('ticks all off on a rig that runs', () => {
    const checks = checklist(rig, [key], seen({}));
    expect(checks.map((c) => [c.id, c.state])).toEqual(
      ['key', 'block', 'rate', 'volts', 'edges', 'speed'].map((id) => [id, 'done']),
    );
    expect(checks.every((c) => c.todo === '')).toBe(true);
  });

  it('takes a key for accepted by its last use alone', () => {
    const used = { ...key, lastUsedAt: '2026-03-01T10:00:00Z' };
    expect(checklist(rig, [used], noLiveRig)[0]).toMatchObject({ state: 'done', says: 'board' });
  });

  it('says when fewer samples arrive than declared, unless the stream has ended', () => {
    const rates = { declaredHz: 20000, arrivingHz: 15000, toothHz: 600 };
    expect(of('rate', { rates })).toMatchObject({ state: 'wrong', says: '20 kS/s declared, 15 kS/s arrive' });
    expect(of('rate', { rates, state: 'silent' })?.state).toBe('done');
    expect(of('rate', { rates, lastBlockAt: '2026-03-01T09:59:59.300Z' })?.state).toBe('done');
  });

  it('is loud about volts above what the input takes', () => {
    const over = of('volts', { channels: [channel('A'), channel('B', 10, 0.4, 4.8)] });
    expect(over?.state).toBe('wrong');
    expect(over?.todo).toContain('B reaches 4.80 V');
  });

  it('sees a channel that hardly moves', () => {
    const flat = of('volts', { channels: [channel('A'), channel('B', 0, 1.64, 1.65)] });
    expect(flat).toMatchObject({ state: 'wrong' });
    expect(flat?.todo).toMatch(/^B hardly moves/);
  });

  it('names the channels without an edge', () => {
    const half = of('edges', { channels: [channel('A'), channel('B', 0)] });
    expect(half?.state).toBe('waiting');
    expect(half?.todo).toContain('No edge yet on B.');
  });

  it.each([
    [{ speedRpm: 4000 }, 'wrong'],
    [{ speedRpm: 2 }, 'wrong'],
    [{ speedRpm: -1500, direction: 'reverse' }, 'wrong'],
    [{ speedRpm: 700 }, 'done'],
    [{ speedRpm: null, state: 'unknown' }, 'waiting'],
  ] as const)('judges %j as %s', (change, state) => {
    expect(of('speed', change)?.state).toBe(state);
  });

  it('takes the speed from the last minute when the lines have ended', () => {
    const silent = seen({ state: 'silent', speedRpm: null });
    const past = { ...silent, speedHistory: { agoS: [3, 2, 1], rpm: [1490, 1500, null] } };
    expect(checklist(rig, [key], past).at(-1)).toMatchObject({ state: 'done', says: '1500.0 rpm' });
  });
});

describe('mergeChecks', () => {
  const running = checklist(rig, [key], seen({}));

  it('keeps what was done when the stream ends', () => {
    const merged = mergeChecks(running, checklist(rig, [key], noLiveRig));
    expect(merged.every((c) => c.state === 'done')).toBe(true);
  });

  it('takes what has gone wrong since', () => {
    const merged = mergeChecks(running, checklist(rig, [key], seen({ speedRpm: 4000 })));
    expect(merged.at(-1)?.state).toBe('wrong');
  });
});

describe('rateWords', () => {
  it.each([
    [20000, '20 kS/s'],
    [12345, '12.3 kS/s'],
    [250, '250 S/s'],
  ])('%d reads %s', (hz, words) => {
    expect(rateWords(hz)).toBe(words);
  });
});
