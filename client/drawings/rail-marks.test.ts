import { describe, expect, it } from 'vitest';
import { directionAt, railItems } from '@/client/drawings/rail-marks';
import type { RailEdge } from '@/client/drawings/rail-marks';
import { timeScale } from '@/client/drawings/time-axis';

const edge = (t: number, change: Partial<RailEdge> = {}): RailEdge => ({
  channel: 'A',
  t,
  rising: true,
  direction: 'forward',
  ...change,
});
const time = timeScale(0, 1, 0, 100);

describe('railItems', () => {
  it('marks every edge where there is room, the uncounted ones as minor', () => {
    const items = railItems(
      [edge(0.2), edge(0.5, { rising: false }), edge(0.8, { channel: 'B' })],
      'A',
      time,
    );
    expect(items.map((i) => i.kind === 'mark' && i.minor)).toEqual([false, true, true]);
  });
  it('marks one a cycle where edges are dense', () => {
    const edges = Array.from({ length: 8 }, (_, i) => edge(i / 8, { rising: i % 2 === 0 }));
    expect(railItems(edges, 'A', time)).toHaveLength(4);
  });
  it('merges marks under 2 px into a strip and splits it where the direction turns', () => {
    const edges = Array.from({ length: 100 }, (_, i) =>
      edge(i / 100, { direction: i < 50 ? 'forward' : 'reverse' }),
    );
    const items = railItems(edges, 'A', time);
    expect(items).toHaveLength(2);
    expect(items[0]).toMatchObject({ kind: 'strip', direction: 'forward', count: 50 });
  });
  it('leaves out what is not in the window', () => {
    expect(railItems([edge(-0.1), edge(1.2)], 'A', time)).toEqual([]);
  });
});

describe('directionAt', () => {
  const stretches = [
    { from: 0, to: 2, value: 'forward' as const },
    { from: 2, to: 3, value: 'stopped' as const },
    { from: 3, to: 5, value: 'reverse' as const },
  ];
  it('finds the stretch, claims nothing where stopped or outside', () => {
    expect(directionAt(stretches, 1)).toBe('forward');
    expect(directionAt(stretches, 2.5)).toBe('unknown');
    expect(directionAt(stretches, 4)).toBe('reverse');
    expect(directionAt(stretches, 9)).toBe('unknown');
  });
});
