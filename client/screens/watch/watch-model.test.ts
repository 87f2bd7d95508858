import { describe, expect, it } from 'vitest';
import type { Finding } from '@/signal/model';
import type { LiveRigView } from '@/client/data/use-live';
import { demoFrame } from '@/client/screens/gallery/demo-frame';
import { clockText, watchNow } from '@/client/screens/watch/watch-model';

const rig = { sensing: 'quadrature' as const };
const frame = demoFrame({ atS: 3 });
const atMs = Date.parse(frame.at);
const view: LiveRigView = {
  frame,
  speedHistory: null,
  receivedAtMs: atMs,
  stale: false,
  gone: false,
  connection: { status: 'live' },
};
const weak: Finding = {
  code: 'weak-swing',
  channel: 'A',
  from: 0,
  to: null,
  severity: 'fault',
  outcome: 'found',
  at: 0,
  evidence: {},
  message: 'm',
  remedy: 'r',
  causedBy: null,
};

describe('watchNow', () => {
  it('says the speed of a live rig', () => {
    expect(watchNow(rig, view, atMs + 100)).toMatchObject({
      isLive: true,
      saying: { big: { kind: 'number' } },
    });
  });
  it('blanks the speed once no block came for more than 2 s, whatever the hub last said', () => {
    const late = watchNow(rig, view, atMs + 2500);
    expect(late.isLive).toBe(false);
    expect(late.saying.big).toEqual({ kind: 'word', text: 'silent' });
  });
  it('blanks the speed when frames stop or the link is lost', () => {
    expect(watchNow(rig, { ...view, stale: true }, atMs).saying.big.kind).toBe('word');
    const lost = { status: 'waiting' as const, retryAtMs: 0, losses: 1, retry: () => undefined };
    expect(watchNow(rig, { ...view, connection: lost }, atMs).saying.big.kind).toBe('word');
  });
  it('never says good of a rig that is not live, and keeps what was wrong', () => {
    expect(watchNow(rig, { ...view, stale: true }, atMs).health).toMatchObject({ status: 'unknown' });
    const bad = { ...view, stale: true, frame: { ...frame, live: { ...frame.live, findings: [weak] } } };
    expect(watchNow(rig, bad, atMs).health).toEqual({ status: 'fault', word: '1 finding before' });
  });
  it('does not call a rig healthy whose speed is not known', () => {
    const unknown = {
      ...view,
      frame: { ...frame, live: { ...frame.live, state: 'unknown' as const, speedRpm: null } },
    };
    expect(watchNow(rig, unknown, atMs).health.status).toBe('unknown');
  });
  it('says when the settings cannot be run', () => {
    const broken = {
      ...view,
      frame: { ...frame, live: { ...frame.live, setupProblem: 'cutoff above half the rate' } },
    };
    expect(watchNow(rig, broken, atMs).health.word).toBe('settings do not run');
  });
});

describe('clockText', () => {
  const at = new Date(2026, 2, 5, 15, 5, 7).toISOString();
  it('has 12 or 24 hours as the locale has', () => {
    expect(clockText(at, 'second', 'en-GB')).toBe('15:05:07');
    expect(clockText(at, 'minute', 'de')).toBe('15:05');
    expect(clockText(at, 'minute', 'en-US')).toMatch(/^3:05\sPM$/);
  });
});
