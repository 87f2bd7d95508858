import { describe, expect, it } from 'vitest';
import { boundText, errorText, rpmText, sinceText, speedSaying } from '@/client/drawings/speed-words';
import type { SpeedSource } from '@/client/drawings/speed-words';
import type { Live } from '@/server/contract';

const running: Live = {
  state: 'running',
  stream: 's',
  streamS: 100,
  speedRpm: 1498.62,
  speedErrorRpm: 0.4,
  speedAtMostRpm: 2000,
  direction: 'forward',
  turns: 10,
  turnsSince: null,
  rates: { declaredHz: 20000, arrivingHz: 20000, toothHz: 600 },
  margin: null,
  findings: [],
  lookbackS: 600,
  lastBlockAt: '2026-01-01T13:52:07Z',
  sinceLastEdgeS: 0.001,
  pulses: 1,
  positions: 1,
  synced: true,
  settingsVersion: 7,
  phaseDeg: null,
  delayS: 0,
  channels: [],
  shaft: null,
  setupProblem: null,
};

function say(change: Partial<Live>, source: Partial<SpeedSource> = {}) {
  return speedSaying({
    live: { ...running, ...change },
    stale: false,
    lastBlockText: '13:52:07',
    blockLate: false,
    connected: true,
    sensing: 'quadrature',
    ...source,
  });
}

describe('speedSaying', () => {
  it('says number, direction and error while running', () => {
    expect(say({})).toMatchObject({
      big: { kind: 'number', text: '1498.6' },
      direction: 'forward',
      small: '± 0.4',
    });
  });
  it('claims no direction with one channel', () => {
    expect(say({ direction: 'unknown' }, { sensing: 'single' })).toMatchObject({
      direction: 'unknown',
      directionWord: 'direction not sensed',
    });
  });
  it('never shows a number that is not live', () => {
    for (const source of [{ stale: true }, { connected: false }, { blockLate: true }]) {
      const saying = say({}, source);
      expect(saying.big.kind).toBe('word');
      expect(saying.small).toContain('13:52:07');
      expect(saying.loud).toBe(true);
    }
    expect(say({ state: 'silent', speedRpm: null }).small).toBe('no block since 13:52:07');
  });
  it('says the floor of a standstill and since when', () => {
    expect(say({ state: 'stopped', speedRpm: 0, speedAtMostRpm: 0.6, sinceLastEdgeS: 12.4 })).toMatchObject({
      big: { text: 'stopped' },
      small: 'below 0.6 rpm for 12 s',
    });
  });
  it('says a bound as a bound', () => {
    expect(say({ speedRpm: 40, speedAtMostRpm: 40, sinceLastEdgeS: 0.5 }).small).toContain('at most 40');
    expect(say({ state: 'unknown', speedRpm: null, speedAtMostRpm: 40 })).toMatchObject({
      big: { text: 'unknown' },
      small: 'at most 40 rpm',
      loud: true,
    });
  });
  it('does not write an error as large as the speed', () => {
    expect(say({ speedErrorRpm: 1498.62 })).toMatchObject({ big: { text: '1498.6' }, small: '' });
  });
  it('does not call a tooth late before anyone can read it', () => {
    expect(say({ speedRpm: 1490, speedAtMostRpm: 1490, sinceLastEdgeS: 0.002 }).big.text).toBe('1490.0');
  });
});

describe('numbers', () => {
  it.each([
    [1498.62, '1498.6'],
    [-218.04, '\u2212218.0'],
    [12345.6, '12346'],
    [3.14159, '3.14'],
    [0, '0'],
    [-0.001, '0.00'],
  ])('%f reads %s', (rpm, text) => {
    expect(rpmText(rpm)).toBe(text);
  });
  it('rounds bounds up', () => {
    expect(boundText(0.601)).toBe('0.61');
    expect(boundText(40)).toBe('40');
    expect(boundText(123.4)).toBe('130');
    expect(boundText(0)).toBe('0');
  });
  it('writes errors and spans short', () => {
    expect(errorText(0.42)).toBe('0.4');
    expect(errorText(0.004)).toBe('0.004');
    expect(sinceText(119.9)).toBe('119 s');
    expect(sinceText(3600)).toBe('60 min');
  });
});
