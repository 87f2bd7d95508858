import { describe, expect, it } from 'vitest';
import { channelFacts, motionFacts, shortTime } from '@/client/screens/replay/measured-facts';
import type { CaptureStatistics, ChannelStatistics } from '@/signal/capture-statistics/shapes';

const bare: CaptureStatistics = {
  from: 0,
  to: 1,
  channels: {},
  jitter: null,
  turns: [],
  speedOrders: null,
  swingOrders: null,
  pair: null,
};
const channel: ChannelStatistics = {
  levels: { lowV: 0.2, highV: 3.2, resolutionV: 0.02 },
  sine: null,
  dutyFactor: { mean: 0.5, least: 0.49, most: 0.51, rms: 0.002 },
  riseS: null,
  fallS: null,
  overshootPct: null,
  extraMidCrossings: null,
};

describe('what was measured, in words', () => {
  it('leaves out what the capture cannot tell', () => {
    expect(motionFacts(bare)).toEqual([]);
    expect(channelFacts({ ...channel, levels: null, dutyFactor: null })).toEqual([]);
  });

  it('gives speed and swing once a turn as shares of their means, in reverse too', () => {
    const lines = [{ order: 1, amplitude: 6, phaseDeg: 0 }];
    const facts = motionFacts({
      ...bare,
      turns: [{ t: 1, rpm: -600 }],
      speedOrders: { turns: 9, meanRpm: -600, lines },
      swingOrders: { meanV: 2, lines: [{ ...lines[0]!, amplitude: 0.3 }] },
    });
    const value = (name: string) => facts.find((fact) => fact.name === name)?.value;
    expect(value('speed, once a turn')).toBe('± 1 %');
    expect(value('swing, once a turn')).toBe('± 15 %');
  });

  it('tells the slowest from the fastest turn, in reverse too', () => {
    const of = (...rpms: number[]) => {
      const facts = motionFacts({ ...bare, turns: rpms.map((rpm, t) => ({ t, rpm })) });
      return ['slowest turn', 'fastest turn'].map((name) => facts.find((f) => f.name === name)?.value);
    };
    expect(of(208.6719, 208.6873, 208.6774)).toEqual(['208.672 rpm', '208.687 rpm']);
    expect(of(-81.84, -198.51)).toEqual(['\u221282 rpm', '\u2212199 rpm']);
    expect(of(600)).toEqual(['600.0 rpm', '600.0 rpm']);
  });

  it('says the sine of a near-sine and the levels of the others', () => {
    expect(channelFacts(channel)[0]).toEqual({ name: 'state levels', value: '0.2 and 3.2 V' });
    const near = { ...channel, sine: { amplitudeV: 0.8, offsetV: 1.65, residualRmsV: 0.004 } };
    expect(channelFacts(near)[0]).toEqual({ name: 'sine that fits', value: '1.65 ± 0.8 V' });
  });

  it('writes times with the unit that suits them', () => {
    expect([4e-8, 3.2e-6, 0.0015, 2].map(shortTime)).toEqual(['40 ns', '3.2 µs', '1.5 ms', '2 s']);
  });
});
