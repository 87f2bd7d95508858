import { describe, expect, it } from 'vitest';
import type { Channel } from '@/signal/model';
import { clipLevels } from '@/client/drawings/clip-levels';

const sensor = {
  kind: 'linear' as const,
  supplyV: 3.3,
  quiescentV: null,
  sensitivityMvPerMt: null,
  activeLow: false,
  operateMt: null,
  releaseMt: null,
};
const channel: Channel = {
  name: 'A',
  role: 'A',
  voltsPerCode: -0.001,
  codeOffset: 100,
  minCode: 0,
  maxCode: 4095,
  maxInputV: null,
  sensor,
};

describe('clipLevels', () => {
  it('are the ends of the codes in volts, whatever their order', () => {
    const levels = clipLevels(channel);
    expect(levels.clipLowV).toBeCloseTo(-3.995, 9);
    expect(levels.clipHighV).toBeCloseTo(0.1, 9);
  });
  it('are not known without codes, and not meant for switching sensors', () => {
    const none = { clipLowV: null, clipHighV: null };
    expect(clipLevels({ ...channel, maxCode: null })).toEqual(none);
    expect(clipLevels({ ...channel, sensor: { ...sensor, kind: 'latch' } })).toEqual(none);
    expect(clipLevels(undefined)).toEqual(none);
  });
});
