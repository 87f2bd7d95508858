import { describe, expect, it } from 'vitest';
import type { Filter } from '@/signal/model';
import { defaultSettings } from '@/signal/model';
import { LiveSignal } from '@/server/hub/live-signal';
import { ribbonOf } from '@/server/hub/live-view';

const rateHz = 1000;
const setup = {
  sensing: 'single' as const,
  wheel: { pulsesPerTurn: 10, missingPulses: 0, gearRatio: 1, widthClasses: null },
  channels: [
    {
      name: 'A',
      role: 'A' as const,
      voltsPerCode: 0.001,
      codeOffset: 0,
      minCode: 0,
      maxCode: 4095,
      maxInputV: 3.3,
      sensor: {
        kind: 'linear' as const,
        supplyV: 3.3,
        quiescentV: 1.65,
        sensitivityMvPerMt: 30,
        activeLow: false,
        operateMt: null,
        releaseMt: null,
      },
    },
  ],
  expectedDirection: null,
  ratedRpm: null,
};

/** 25 Hz about 2 V, five seconds. */
function running(filter: Filter): LiveSignal {
  const settings = { ...defaultSettings, filter };
  const live = new LiveSignal({ id: 'r', setup, settings, settingsVersion: 1 }, rateHz, ['A'], 0);
  for (let at = 0; at < 5000; at += 100) {
    const block = Int16Array.from(
      { length: 100 },
      (_, i) => 2000 + Math.round(500 * Math.sin((2 * Math.PI * 25 * (at + i)) / rateHz)),
    );
    live.append(at, [block], 100);
  }
  return live;
}

const values = (of: (number | null)[]) => of.filter((v) => v !== null);

describe('the picture of a running rig', () => {
  it('ends on the last counted edge and spans the teeth asked for', () => {
    const ribbon = ribbonOf(
      running({ kind: 'none' }),
      setup,
      { kind: 'none' },
      { teeth: 4, columns: 400, anchor: 'edge' },
    );
    expect(ribbon.anchor).toBe('edge');
    expect(ribbon.signal).toBe('raw');
    expect(ribbon.toS - ribbon.fromS).toBeCloseTo(4 / 25, 3);
    expect(ribbon.edges.at(-1)).toMatchObject({ rising: true, t: ribbon.toS });
    const lane = ribbon.lanes[0]!;
    expect(Math.max(...values(lane.max))).toBeCloseTo(2.5, 2);
    expect(Math.min(...values(lane.min))).toBeCloseTo(1.5, 2);
    expect(lane.clipHighV).toBeCloseTo(4.095, 6);
  });

  it('shows what the band sees where the filter takes the level away', () => {
    const filter = {
      kind: 'highpass' as const,
      family: 'butterworth' as const,
      order: 2 as const,
      cutoffHz: 2,
    };
    const ribbon = ribbonOf(running(filter), setup, filter, { spanS: 0.5, columns: 500, anchor: 'now' });
    expect(ribbon.signal).toBe('filtered');
    const lane = ribbon.lanes[0]!;
    expect(Math.max(...values(lane.max))).toBeCloseTo(0.5, 1);
    expect(Math.min(...values(lane.min))).toBeCloseTo(-0.5, 1);
    expect(lane.operateV!).toBeLessThan(0.5);
    expect(lane.releaseV!).toBeGreaterThan(-0.5);
    expect(lane.clipHighV).toBeNull();
  });

  it('stands around an instant that was asked for, while it is still held', () => {
    const ribbon = ribbonOf(
      running({ kind: 'none' }),
      setup,
      { kind: 'none' },
      { spanS: 0.2, columns: 200, anchor: 'edge', atS: 1.5 },
    );
    expect(ribbon.fromS).toBeCloseTo(1.4, 9);
    expect(ribbon.toS).toBeCloseTo(1.6, 9);
    expect(values(ribbon.lanes[0]!.max).length).toBeGreaterThan(190);
    const ahead = ribbonOf(
      running({ kind: 'none' }),
      setup,
      { kind: 'none' },
      { spanS: 0.2, columns: 200, anchor: 'edge', atS: 60 },
    );
    expect(values(ahead.lanes[0]!.max)).toEqual([]);
  });
});
