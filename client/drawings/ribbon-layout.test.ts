import { describe, expect, it } from 'vitest';
import { keepRanges, laneY, ribbonSentence, stackLanes } from '@/client/drawings/ribbon-layout';
import type { RibbonLane } from '@/client/drawings/ribbon-types';
import type { Range } from '@/client/drawings/trace';

const lane = (channel: string): RibbonLane => ({
  channel,
  firstS: 0,
  stepS: 1,
  min: [0, 3],
  max: [0, 3],
  lowV: 0.4,
  highV: 2.9,
  clipLowV: null,
  clipHighV: null,
  bands: [],
});
const range = () => ({ lowV: 0, highV: 2 });

describe('stackLanes', () => {
  it('shares the height', () => {
    const boxes = stackLanes([lane('A'), lane('B')], 200, null, range);
    expect(boxes.map((b) => [b.top, b.bottom])).toEqual([
      [0, 100],
      [100, 200],
    ]);
  });
  it('gives the lane in focus the room', () => {
    const boxes = stackLanes([lane('A'), lane('B'), lane('C'), lane('D')], 300, 'B', range);
    expect(boxes.map((b) => b.thin)).toEqual([true, false, true, true]);
    expect(boxes[1]!.bottom - boxes[1]!.top).toBe(300 - 3 * 44);
    expect(boxes[3]!.bottom).toBe(300);
  });
  it('puts high volts above low ones', () => {
    const y = laneY(stackLanes([lane('A')], 100, null, range)[0]!);
    expect(y(2)).toBe(20);
    expect(y(0)).toBe(92);
  });
});

describe('keepRanges', () => {
  it('holds the range of a channel from frame to frame', () => {
    const held = new Map<string, Range>();
    const first = keepRanges(held, lane('A'));
    expect(keepRanges(held, { ...lane('A'), max: [0, 2.9] })).toBe(first);
  });
});

describe('ribbonSentence', () => {
  it('says lanes, teeth and what is missing', () => {
    const edges = [{ channel: 'A', t: 0.5, rising: true, direction: 'forward' as const }];
    const gaps = [{ from: 1, to: 2, lostSamples: 5, estimated: false }];
    const data = { fromS: 0, toS: 2, lanes: [lane('A')], edges, rejected: [], gaps };
    expect(ribbonSentence(data, '2 s')).toBe(
      'Signal over 2 s, channel A from 0.40 to 2.90 volts. 1 tooth counted. 1 gap with lost samples.',
    );
  });
});
