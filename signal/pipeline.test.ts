import { describe, expect, it } from 'vitest';
import type { Filter, RigSetup, SampleArray, Settings } from '@/signal/model';
import { defaultSettings } from '@/signal/model';
import { createPipeline } from '@/signal/pipeline';
import type { Pipeline } from '@/signal/pipeline-types';
import {
  normal,
  sampled,
  seeded,
  testChannel,
  testPipeline,
  testRig,
  toothWheel,
} from '@/signal/test-signals';

function feed(pipeline: Pipeline, ...arrays: SampleArray[]): void {
  pipeline.process(arrays, arrays[0]!.length);
}

function speeds(pipeline: Pipeline): { t: number; rpm: number; errorRpm: number }[] {
  const { count, t, rpm, errorRpm } = pipeline.output.speed;
  return Array.from({ length: count }, (_, i) => ({ t: t[i]!, rpm: rpm[i]!, errorRpm: errorRpm[i]! }));
}

function rises(pipeline: Pipeline, channel = 0): number[] {
  const { count, midT, flags } = pipeline.output.edges[channel]!;
  return Array.from({ length: count }, (_, i) => [midT[i]!, flags[i]!] as const).flatMap(([t, f]) =>
    f & 1 ? [t] : [],
  );
}

const rateHz = 20_000;
const wave =
  (hz: number, shift = 0) =>
  (t: number): number =>
    1.65 + Math.sin(2 * Math.PI * (hz * t - shift));

describe('a single channel', () => {
  it('counts every tooth once from the first on and says the speed of a turn', () => {
    const pipeline = testPipeline(testRig('single', 24), rateHz);
    feed(pipeline, sampled(rateHz, rateHz, wave(480.5, 0.25)));
    const status = pipeline.status();
    expect(status.pulses).toBe(481);
    expect(status.turns).toBeCloseTo(481 / 24, 12);
    expect(status.speedRpm).toBeCloseTo((60 * 480.5) / 24, 3);
    expect(status.toothHz).toBeCloseTo(480.5, 3);
    expect(status.direction).toBe('unknown');
    expect(status.state).toBe('running');
    const times = rises(pipeline);
    // Linear interpolation at 41 samples a period, and a middle that is off by 1 % of the swing at most.
    for (const [k, t] of times.entries())
      expect(Math.abs(t - (k + 0.25) / 480.5)).toBeLessThan(0.02 / (2 * Math.PI * 480.5));
  });

  it('begins with an unknown stretch', () => {
    const pipeline = testPipeline(testRig('single', 24), rateHz);
    feed(pipeline, sampled(4000, rateHz, wave(200)));
    expect(speeds(pipeline)[0]).toEqual({ t: 0, rpm: NaN, errorRpm: NaN });
    expect(speeds(pipeline)[1]!.rpm).toBeCloseTo(500, 0);
    expect(pipeline.output.directions).toEqual([{ t: 0, value: 'unknown' }]);
  });

  it('falls to a bound when edges stop, then to 0, and never makes an edge of the noise', () => {
    const noise = normal(seeded(7));
    const pipeline = testPipeline(testRig('single', 60), 10_000);
    const volts = sampled(90_000, 10_000, (t) => wave(600)(Math.min(t, 1.4)) + 0.05 * noise());
    feed(pipeline, volts.subarray(0, 14_000));
    const running = pipeline.status();
    expect(running.speedRpm).toBeCloseTo(600, 0);
    expect(running.speedRpm).toBeLessThanOrEqual(running.speedAtMostRpm!);
    feed(pipeline, volts.subarray(14_000, 24_000));
    const slowing = pipeline.status();
    const elapsedS = 2.4 - slowing.lastEdgeS!;
    expect(slowing.state).toBe('running');
    expect(slowing.speedRpm).toBeLessThan(1.1);
    expect(slowing.speedRpm).toBe(slowing.speedAtMostRpm);
    expect(slowing.speedAtMostRpm).toBeCloseTo(60 / (60 * elapsedS), 1);
    feed(pipeline, volts.subarray(24_000));
    const stopped = pipeline.status();
    expect(stopped.state).toBe('stopped');
    expect(stopped.speedRpm).toBe(0);
    expect(stopped.speedAtMostRpm).toBeCloseTo(60 / (60 * 2), 12);
    expect(stopped.direction).toBe('stopped');
    expect(stopped.pulses).toBe(running.pulses);
    expect(speeds(pipeline).at(-1)!.rpm).toBe(0);
    expect(speeds(pipeline).at(-1)!.t).toBeCloseTo(stopped.lastEdgeS! + 2, 9);
  });

  it.each<[string, Filter]>([
    ['none', { kind: 'none' }],
    ['low pass', { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 100 }],
    ['band pass', { kind: 'bandpass', family: 'butterworth', order: 2, lowHz: 45, highHz: 55 }],
  ])('finds nothing in pure noise (%s)', (_name, filter) => {
    const noise = normal(seeded(11));
    const pipeline = testPipeline(testRig('single', 60), 10_000, { filter });
    feed(
      pipeline,
      sampled(400_000, 10_000, () => 1.65 + 0.05 * noise()),
    );
    expect(pipeline.output.edges[0]!.count).toBe(0);
    expect(pipeline.status().channels[0]!.operateV).toBeNull();
    expect(pipeline.status().state).toBe('stopped');
  });

  it('reads a constant signal, of any kind of array, as stopped', () => {
    for (const array of [
      new Int16Array(70_000).fill(2000),
      new Float32Array(70_000).fill(1.2),
      new Uint8Array(70_000).fill(7),
    ]) {
      const pipeline = testPipeline(testRig('single', 6), rateHz, {
        filter: { kind: 'lowpass', family: 'bessel', order: 8, cutoffHz: 50 },
      });
      feed(pipeline, array);
      expect(pipeline.output.edges[0]!.count).toBe(0);
      expect(pipeline.status()).toMatchObject({
        state: 'stopped',
        speedRpm: 0,
        speedAtMostRpm: null,
        margin: null,
      });
    }
  });

  it('puts edges of a filtered signal on the raw axis', () => {
    const hz = 400;
    for (const filter of [
      { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 800 },
      { kind: 'lowpass', family: 'bessel', order: 6, cutoffHz: 600 },
      { kind: 'highpass', family: 'butterworth', order: 2, cutoffHz: 40 },
      { kind: 'bandpass', family: 'butterworth', order: 4, lowHz: 100, highHz: 900 },
    ] as Filter[]) {
      const pipeline = testPipeline(testRig('single', 24), rateHz, { filter });
      feed(pipeline, sampled(rateHz, rateHz, wave(hz)));
      const settled = rises(pipeline).filter((t) => t > 0.3);
      expect(settled.length).toBeGreaterThan(270);
      // The fitted band's middle is within 2 % of the swing: 0.04 V over a slope of 2 pi f.
      for (const t of settled)
        expect(Math.abs(t * hz - Math.round(t * hz)) / hz).toBeLessThan(0.04 / (2 * Math.PI * hz));
    }
  });

  it('gives the same speed by every method on a steady shaft', () => {
    for (const method of ['tooth', 'turn', 'window'] as const) {
      const pipeline = testPipeline(testRig('single', 12), rateHz, {
        speed: { method, windowS: 0.05, stoppedAfterS: 2 },
      });
      feed(pipeline, sampled(rateHz, rateHz, wave(333)));
      expect(Math.abs(pipeline.status().speedRpm! - (60 * 333) / 12)).toBeLessThan(1);
    }
  });

  it('states an error that the true speed keeps to', () => {
    const noise = normal(seeded(23));
    for (const method of ['tooth', 'turn', 'window'] as const) {
      const pipeline = testPipeline(testRig('single', 12), rateHz, {
        speed: { method, windowS: 0.05, stoppedAfterS: 2 },
      });
      feed(
        pipeline,
        sampled(4 * rateHz, rateHz, (t) => wave(333)(t) + 0.03 * noise()),
      );
      const known = speeds(pipeline).slice(30);
      const within = known.filter(
        ({ rpm, errorRpm }) => Math.abs(rpm - (60 * 333) / 12) < 2 * errorRpm,
      ).length;
      expect(within / known.length).toBeGreaterThan(0.95);
      // Honest, not timid: the stated error is no more than twice the true rms.
      const rms = Math.sqrt(
        known.reduce((sum, { rpm }) => sum + (rpm - (60 * 333) / 12) ** 2, 0) / known.length,
      );
      const stated = known.reduce((sum, { errorRpm }) => sum + errorRpm, 0) / known.length;
      expect(stated / rms).toBeLessThan(2);
    }
  });
});

describe('a wheel with missing teeth', () => {
  it.each([
    [36, 1],
    [60, 2],
  ])('%i - %i: position, turns and speed across the gap', (positions, missing) => {
    const pipeline = testPipeline(testRig('single', positions, missing), rateHz);
    feed(
      pipeline,
      sampled(
        2 * rateHz,
        rateHz,
        toothWheel(positions, missing, (t) => 20 * t + 0.4),
      ),
    );
    const status = pipeline.status();
    expect(status.synced).toBe(true);
    expect(Math.abs(status.turns - 40)).toBeLessThan(1.5 / positions);
    expect(status.pulses).toBeLessThan(status.positions);
    expect(status.wheelFace!.numbered).toBe(true);
    expect(status.wheelFace!.positions.filter((position) => position.missing)).toHaveLength(missing);
    for (const { rpm } of speeds(pipeline).slice(3)) expect(Math.abs(rpm - 1200)).toBeLessThan(2);
    expect(status.findings).toEqual([]);
  });

  it('keeps sync from 300 to 3000 rpm in two seconds', () => {
    const pipeline = testPipeline(testRig('single', 60, 2), rateHz, {
      speed: { method: 'tooth', windowS: 0.1, stoppedAfterS: 2 },
    });
    feed(
      pipeline,
      sampled(
        2 * rateHz,
        rateHz,
        toothWheel(60, 2, (t) => 5 * t + 11.25 * t * t),
      ),
    );
    expect(Math.abs(pipeline.status().turns - 55)).toBeLessThan(0.1);
    for (const { t, rpm } of speeds(pipeline).slice(70)) {
      const truth = 60 * (5 + 22.5 * t);
      expect(Math.abs(rpm / truth - 1)).toBeLessThan(0.02);
    }
  });

  it('lets more silence pass before it bounds the speed where the gap may be due', () => {
    const pipeline = testPipeline(testRig('single', 60, 2), rateHz);
    feed(
      pipeline,
      sampled(100, rateHz, () => 0.6),
    );
    const wheel = toothWheel(60, 2, (t) => 20 * t + 0.1);
    feed(pipeline, sampled(600, rateHz, wheel));
    const status = pipeline.status();
    expect(status.synced).toBe(false);
    expect(status.speedAtMostRpm).toBeCloseTo((60 * 3) / (60 * (status.nowS - status.lastEdgeS!)), -3);
  });
});

describe('quadrature', () => {
  const pair = (cycles: (t: number) => number, n: number, noise: () => number = () => 0): Float64Array[] =>
    [0, 0.25].map((shift) =>
      sampled(n, rateHz, (t) => 1.65 + Math.sin(2 * Math.PI * (cycles(t) - shift)) + 0.02 * noise()),
    );

  it('says forward where A leads, reverse where B does', () => {
    for (const sign of [1, -1]) {
      const pipeline = testPipeline(testRig('quadrature', 64), rateHz);
      feed(pipeline, ...pair((t) => sign * 640 * t + 0.1, rateHz));
      const status = pipeline.status();
      expect(status.direction).toBe(sign > 0 ? 'forward' : 'reverse');
      expect(status.speedRpm).toBeCloseTo(sign * 600, 1);
      expect(Math.abs(status.turns - sign * 10)).toBeLessThan(1 / 64);
      expect(status.phaseDeg).toBeCloseTo(sign * 90, 0);
    }
  });

  it('knows a reversal within one pulse, and counts back to nothing', () => {
    const noise = normal(seeded(5));
    const pipeline = testPipeline(testRig('quadrature', 64), rateHz);
    feed(pipeline, ...pair((t) => (t < 1 ? 640 * t : 1280 - 640 * t), 2 * rateHz, noise));
    const { directions } = pipeline.output;
    expect(directions.map(({ value }) => value)).toEqual(['unknown', 'forward', 'reverse']);
    expect(directions[2]!.t - 1).toBeGreaterThan(0);
    expect(directions[2]!.t - 1).toBeLessThan(1 / 640);
    expect(Math.abs(pipeline.status().pulses)).toBeLessThanOrEqual(0.25);
    expect(speeds(pipeline).filter(({ rpm }) => Number.isNaN(rpm))).toHaveLength(2);
    for (const { t, rpm } of speeds(pipeline).slice(2))
      if (!Number.isNaN(rpm)) expect(Math.sign(rpm)).toBe(t < 1 ? 1 : -1);
  });

  it('makes no speed of dither at one edge', () => {
    const pipeline = testPipeline(testRig('quadrature', 64), rateHz);
    const cycles = (t: number): number => (t < 0.5 ? 100 * t : 50 + 0.12 * Math.sin(2 * Math.PI * 90 * t));
    feed(pipeline, ...pair(cycles, 2 * rateHz));
    const status = pipeline.status();
    expect(Math.abs(status.pulses - 50)).toBeLessThan(0.6);
    expect(status.speedRpm).toBeNull();
    expect(speeds(pipeline).filter(({ t, rpm }) => t > 0.53 && rpm > 0)).toEqual([]);
  });
});

describe('three-hall', () => {
  it('steps round the ring of six states', () => {
    for (const sign of [1, -1]) {
      const rig = testRig('three-hall', 4);
      rig.channels = rig.channels.map(({ name, role }) =>
        testChannel(name, role, { sensor: { ...testChannel('x', 'U').sensor, kind: 'latch' } }),
      );
      const pipeline = testPipeline(rig, rateHz);
      const arrays = [0, 1, 2].map((k) =>
        sampled(rateHz, rateHz, (t) => (Math.sin(2 * Math.PI * (sign * 100.3 * t - k / 3)) > 0 ? 3.2 : 0.1)),
      );
      feed(pipeline, ...arrays);
      const status = pipeline.status();
      expect(status.direction).toBe(sign > 0 ? 'forward' : 'reverse');
      expect(Math.abs(status.pulses - sign * 100.3)).toBeLessThan(0.6);
      // Square flanks are known to one sample only; the stated error must say so.
      expect(Math.abs(status.speedRpm! - sign * 1504.5)).toBeLessThan(3 * status.speedErrorRpm!);
      expect(status.findings).toEqual([]);
    }
  });
});

describe('gaps', () => {
  it('run the time on, make speed and state unknown, and never bridge', () => {
    const pipeline = testPipeline(testRig('single', 24), rateHz);
    feed(pipeline, sampled(10_000, rateHz, wave(480)));
    const before = pipeline.status().pulses;
    pipeline.skip(5_000, true);
    const after = pipeline.status();
    expect(after).toMatchObject({
      nowS: 0.75,
      speedRpm: null,
      state: 'unknown',
      direction: 'unknown',
      pulses: before,
    });
    feed(
      pipeline,
      sampled(10_000, rateHz, (t) => wave(480)(t + 0.75)),
    );
    expect(pipeline.output.gaps).toEqual([{ fromS: 0.5, toS: 0.75, lostSamples: 5000, estimated: true }]);
    expect(rises(pipeline).filter((t) => t > 0.5 && t < 0.75)).toEqual([]);
    expect(
      speeds(pipeline)
        .filter(({ rpm }) => Number.isNaN(rpm))
        .map(({ t }) => t),
    ).toEqual([0, 0.5]);
    const status = pipeline.status();
    expect(status.countsSinceS).toBeGreaterThan(0.75);
    expect(status.countsSinceS).toBeLessThan(0.75 + 2 / 480);
    expect(status.speedRpm).toBeCloseTo(1200, 1);
    expect(status.findings.map(({ code, evidence }) => [code, evidence.lostSamples])).toEqual([
      ['lost-samples', 5000],
    ]);
  });

  it('of no whole number of samples are none: time stays, and nothing is logged', () => {
    const pipeline = testPipeline(testRig('single', 24), 1000);
    feed(pipeline, sampled(1000, 1000, wave(20)));
    const before = pipeline.status();
    for (const lost of [0.4, 0, -5, NaN, Infinity, -Infinity, 2 ** 60])
      expect([lost, pipeline.skip(lost, false)]).toEqual([lost, false]);
    expect(pipeline.output.gaps).toEqual([]);
    expect(pipeline.status()).toEqual(before);
    expect(pipeline.skip(49.6, false)).toBe(true);
    expect(pipeline.output.gaps).toEqual([{ fromS: 1, toS: 1.05, lostSamples: 50, estimated: false }]);
  });

  it('close the finding once no more follow', () => {
    const pipeline = testPipeline(testRig('single', 24), 1000);
    feed(pipeline, sampled(1000, 1000, wave(20)));
    pipeline.skip(50, false);
    feed(pipeline, sampled(7000, 1000, wave(20)));
    expect(pipeline.status().findings).toEqual([]);
    expect(pipeline.output.closedFindings).toMatchObject([
      { code: 'lost-samples', from: 1, to: 1.05, severity: 'warn' },
    ]);
  });
});

describe('the fitted band', () => {
  it('stands at its fractions of a clean swing', () => {
    const pipeline = testPipeline(testRig('single', 24), rateHz);
    feed(pipeline, sampled(2 * rateHz, rateHz, wave(300)));
    const [channel] = pipeline.status().channels;
    expect(channel!.lowV).toBeCloseTo(0.65, 2);
    expect(channel!.highV).toBeCloseTo(2.65, 2);
    expect(Math.abs(channel!.operateV! - 1.85)).toBeLessThan(0.06);
    expect(Math.abs(channel!.releaseV! - 1.45)).toBeLessThan(0.06);
  });

  it('widens with the noise, to half the swing at most', () => {
    const noise = normal(seeded(3));
    const widths = [0.01, 0.09, 0.3].map((sigma) => {
      const pipeline = testPipeline(testRig('single', 24), rateHz);
      feed(
        pipeline,
        sampled(2 * rateHz, rateHz, (t) => wave(100)(t) + sigma * noise()),
      );
      const [channel] = pipeline.status().channels;
      return (channel!.operateV! - channel!.releaseV!) / (channel!.highV! - channel!.lowV!);
    });
    expect(widths[0]).toBeLessThan(0.3);
    expect(widths[1]).toBeGreaterThan(widths[0]!);
    expect(widths[2]).toBeLessThan(0.52);
  });

  it('follows drift that carries the signal far from where it began, without losing a tooth', () => {
    const pipeline = testPipeline(testRig('single', 24), rateHz);
    feed(
      pipeline,
      sampled(4 * rateHz, rateHz, (t) => 0.2 * Math.sin(2 * Math.PI * (200 * t + 0.5)) + 0.6 * t),
    );
    expect(Math.abs(pipeline.status().pulses - 800)).toBeLessThanOrEqual(1);
  });

  it('finds the teeth again when the swing falls to a third at once', () => {
    const pipeline = testPipeline(testRig('single', 24), rateHz);
    feed(
      pipeline,
      sampled(3 * rateHz, rateHz, (t) => 1.65 + (t < 1 ? 1 : 0.34) * Math.sin(2 * Math.PI * 200 * t)),
    );
    const late = rises(pipeline).filter((t) => t > 1.5 && t < 3);
    expect(Math.abs(late.length - 300)).toBeLessThanOrEqual(1);
  });

  it('takes narrow pulses of a few per cent duty', () => {
    const noise = normal(seeded(8));
    const pipeline = testPipeline(testRig('single', 1), 1000);
    const pulse = (t: number): number =>
      0.1 * Math.exp(-0.5 * (((t % 0.8) - 0.4) / 0.008) ** 2) + 0.002 * noise();
    feed(pipeline, sampled(40_000, 1000, pulse));
    expect(pipeline.status().pulses).toBe(50);
  });

  it('takes hum of a few thousandths of the supply for no teeth, and finds teeth that come later', () => {
    const noise = normal(seeded(8));
    const pipeline = testPipeline(testRig('single', 1), 1000);
    const hum = (t: number): number => 1.65 + 0.003 * Math.sin(2 * Math.PI * 50 * t) + 0.0002 * noise();
    feed(pipeline, sampled(5000, 1000, hum));
    expect(pipeline.status().pulses).toBe(0);
    feed(
      pipeline,
      sampled(5000, 1000, (t) => hum(t) + 0.1 * Math.sin(2 * Math.PI * 10 * t)),
    );
    expect(Math.abs(pipeline.status().pulses - 50)).toBeLessThanOrEqual(1);
  });

  it('leaves a fixed band exactly as typed, for each channel its own', () => {
    const rig = testRig('quadrature', 8);
    const band = {
      mode: 'fixed',
      operateV: 1.9,
      releaseV: 1.4,
      channels: { B: { operateV: 1.8, releaseV: 1.3 } },
    } as const;
    const pipeline = testPipeline(rig, rateHz, { band });
    feed(pipeline, sampled(20_000, rateHz, wave(50)), sampled(20_000, rateHz, wave(50, 0.25)));
    expect(pipeline.output.bands).toEqual([
      { channel: 'A', t: 0, operateV: 1.9, releaseV: 1.4 },
      { channel: 'B', t: 0, operateV: 1.8, releaseV: 1.3 },
    ]);
  });
});

describe('findings', () => {
  const findingsOf = (
    rig: RigSetup,
    settings: Partial<Settings>,
    ...arrays: SampleArray[]
  ): [string, string | null][] => {
    const pipeline = testPipeline(rig, rateHz, settings);
    feed(pipeline, ...arrays);
    return pipeline.status().findings.map(({ code, channel }) => [code, channel]);
  };

  it('accuse one tooth after three turns, not before, and say which', () => {
    const wheel = (t: number): number => {
      const place = 20 * t * 24;
      const height = Math.floor(place) % 24 === 7 ? 0.2 : 1;
      return 0.65 + height * (1 - Math.cos(2 * Math.PI * place));
    };
    const pipeline = testPipeline(testRig('single', 24), rateHz);
    feed(pipeline, sampled(2800, rateHz, wheel));
    expect(pipeline.status().findings).toEqual([]);
    feed(
      pipeline,
      sampled(3 * rateHz, rateHz, (t) => wheel(t + 2800 / rateHz)),
    );
    const [finding] = pipeline.status().findings;
    expect(finding).toMatchObject({
      code: 'missing-tooth',
      channel: 'A',
      outcome: 'found',
      evidence: { position: 7 },
    });
    expect(pipeline.status().margin!.volts).toBeLessThan(0);
  });

  it('take neither a start nor a stop for a missing tooth', () => {
    const turns = (t: number): number =>
      t < 1 ? 5 * t * t : t < 2 ? 5 + 10 * (t - 1) : 15 + 10 * (t - 2) - 5 * (t - 2) ** 2;
    const volts = sampled(3 * rateHz, rateHz, toothWheel(24, 0, turns));
    expect(findingsOf(testRig('single', 24), {}, volts)).toEqual([]);
  });

  it('call a linear sensor at the end of the converter clipped, and a switch not', () => {
    const codes = Int16Array.from(sampled(rateHz, rateHz, wave(100)), (v) =>
      Math.min(2400, Math.round(v * 1000)),
    );
    const clipped = (kind: 'linear' | 'switch'): RigSetup => {
      const rig = testRig('single', 24);
      rig.channels = [
        testChannel('A', 'A', {
          minCode: 0,
          maxCode: 2400,
          sensor: { ...testChannel('A', 'A').sensor, kind },
        }),
      ];
      return rig;
    };
    expect(findingsOf(clipped('linear'), {}, codes)).toEqual([['clipping', 'A']]);
    expect(findingsOf(clipped('switch'), {}, codes)).toEqual([]);
  });

  it('call a channel dead that is silent while its neighbour counts, and not one that stands still with it', () => {
    const rig = testRig('quadrature', 24);
    const still = sampled(rateHz, rateHz, () => 1.65);
    expect(findingsOf(rig, {}, sampled(rateHz, rateHz, wave(100)), still)).toEqual([['dead-channel', 'B']]);
    expect(findingsOf(rig, {}, still, still)).toEqual([]);
  });

  it('call a linear sensor dead that rests at 0 V', () => {
    expect(
      findingsOf(
        testRig('single', 24),
        {},
        sampled(4 * rateHz, rateHz, () => 0.01),
      ),
    ).toEqual([['dead-channel', 'A']]);
  });
});

describe('a start in the middle of a stream', () => {
  it('keeps the stream time axis', () => {
    const pipeline = testPipeline(testRig('single', 24), rateHz, {}, 100_000);
    feed(pipeline, sampled(20_000, rateHz, wave(480)));
    expect(pipeline.status().nowS).toBe(6);
    expect(rises(pipeline)[0]).toBeGreaterThan(5);
    expect(speeds(pipeline)[0]!.t).toBe(5);
  });
});

describe('rates from 1 Hz to 1 MHz', () => {
  it.each([1, 7, 100, 44_100, 1_000_000])('%d Hz', (rate) => {
    const pipeline = testPipeline(testRig('single', 1), rate, {
      speed: { method: 'tooth', windowS: 1, stoppedAfterS: 100 },
    });
    const n = Math.min(200_000, Math.max(2000, rate));
    feed(pipeline, sampled(n, rate, wave(rate / 40)));
    expect(Math.abs(pipeline.status().pulses - n / 40)).toBeLessThanOrEqual(1);
    expect(Math.abs(pipeline.status().speedRpm! / ((60 * rate) / 40) - 1)).toBeLessThan(1e-3);
  });
});

describe('what cannot be built', () => {
  it('is an issue, not an exception', () => {
    const rig = testRig('single', 24);
    const options = { rig, settings: defaultSettings, rateHz, channels: ['A'], startIndex: 0 };
    const code = (more: object): string => {
      const made = createPipeline({ ...options, ...more });
      return made.ok ? 'ok' : made.issue.code;
    };
    const withFilter = (filter: Filter | Filter[]): object => ({ settings: { ...defaultSettings, filter } });
    expect(code({})).toBe('ok');
    expect(code({ rateHz: 0 })).toBe('bad-rate');
    expect(code({ rateHz: NaN })).toBe('bad-rate');
    expect(code({ channels: ['B'] })).toBe('channel-missing');
    expect(code({ channels: [] })).toBe('channel-missing');
    expect(code({ rig: testRig('single', 0) })).toBe('no-pulses');
    expect(code({ rig: testRig('single', 3, 2) })).toBe('too-many-missing');
    expect(code({ rig: { ...rig, wheel: { ...rig.wheel, gearRatio: 0 } } })).toBe('bad-gear');
    expect(code(withFilter({ kind: 'lowpass', family: 'bessel', order: 4, cutoffHz: rateHz / 2 }))).toBe(
      'cutoff-above-nyquist',
    );
    expect(
      code(withFilter([{ kind: 'none' }, { kind: 'highpass', family: 'bessel', order: 2, cutoffHz: 0 }])),
    ).toBe('cutoff-not-positive');
    expect(code(withFilter({ kind: 'notch', family: 'butterworth', order: 2, lowHz: 60, highHz: 40 }))).toBe(
      'bad-filter',
    );
    expect(
      code({ settings: { ...defaultSettings, band: { mode: 'fixed', operateV: 1, releaseV: 1 } } }),
    ).toBe('band-inverted');
    expect(
      code({
        settings: {
          ...defaultSettings,
          band: { mode: 'fixed', operateV: 2, releaseV: 1, channels: { Q: { operateV: 2, releaseV: 1 } } },
        },
      }),
    ).toBe('band-channel-unknown');
    expect(code({ settings: { ...defaultSettings, holdoffS: -1 } })).toBe('bad-holdoff');
    expect(
      code({ settings: { ...defaultSettings, speed: { method: 'turn', windowS: 0, stoppedAfterS: 2 } } }),
    ).toBe('bad-speed');
  });
});
