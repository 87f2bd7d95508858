import { describe, expect, it } from 'vitest';
import { ringVolts, speeds } from '@/signal/findings/test-rings';
import type { Ring } from '@/signal/findings/test-rings';
import { watchFindings } from '@/signal/findings/test-watch';
import { testPipeline, testRig } from '@/signal/test-signals';

const pair: Ring = {
  rateHz: 10_000,
  seconds: 8,
  positions: 12,
  turnsAt: (t) => 5 * t,
  placesDeg: [0, 90],
  shape: { duty: [0.5, 0.5] },
};
const three: Ring = {
  ...pair,
  positions: 4,
  turnsAt: (t) => 8 * t,
  placesDeg: [0, 120, 240],
  shape: { duty: [0.5, 0.5, 0.5] },
};

/** Both inputs hold their value for so long, twice a second, between 2 s and 5 s; A is high then and B is low. */
function holding(ring: Ring, forS: number): Float64Array[] {
  const arrays = ringVolts(ring);
  for (const array of arrays) {
    for (let t = 2.003; t < 5; t += 0.5) {
      const from = Math.round(t * ring.rateHz);
      array.fill(array[from - 1]!, from, from + Math.round(forS * ring.rateHz));
    }
  }
  return arrays;
}

function found(arrays: Float64Array[], ring: Ring, sensing: 'quadrature' | 'three-hall' = 'quadrature') {
  const list = watchFindings(testRig(sensing, ring.positions), ring.rateHz, {}, ...arrays);
  return list.filter(({ code }) => code === 'illegal-state');
}

describe('skipped states', () => {
  it('are found where both lines of a pair change at once, and say which state was skipped to', () => {
    // 60 teeth a second: half a tooth is 8.3 ms.
    const [one, more] = found(holding(pair, 0.0085), pair);
    expect(more).toBeUndefined();
    expect(one).toMatchObject({ channel: null, outcome: 'found' });
    expect(one!.from).toBeGreaterThan(1.9);
    expect(one!.openedS).toBeLessThan(4);
    expect(one!.to).toBeGreaterThan(4.4);
    expect(one!.to).toBeLessThan(5);
    const { fromState, toState, skips } = one!.evidence;
    expect(Number(skips)).toBeGreaterThan(4);
    // Both lines differ between the two.
    expect([fromState, toState]).toEqual(['10', '01']);
  });

  it('are found where the lines seem to change one after the other, and the count is right by chance', () => {
    // Behind a filter both flanks take a while, and of the line that should change first it is a little earlier.
    const filter = { kind: 'lowpass', family: 'bessel', order: 2, cutoffHz: 300 } as const;
    const sines: Ring = { ...pair, shape: 'sine', placesDeg: [0, 104] };
    const arrays = holding(sines, 0.0075);
    const pipeline = testPipeline(testRig('quadrature', 12), pair.rateHz, { filter });
    pipeline.process(arrays, arrays[0]!.length);
    expect(pipeline.status().shaft.falseSteps!.illegal).toBe(0);
    const list = watchFindings(testRig('quadrature', 12), pair.rateHz, { filter }, ...arrays);
    const [one, more] = list.filter(({ code }) => code === 'illegal-state');
    expect(more).toBeUndefined();
    expect(one!.openedS).toBeLessThan(3.2);
    expect(one!.evidence).toMatchObject({ fromState: '10', toState: '01', skips: 6 });
    expect(one!.to).toBeLessThan(5);
  });

  it('are found where three are left out, which looks like a step back: the pace says otherwise', () => {
    const [one, more] = found(holding(pair, 0.0125), pair);
    expect(more).toBeUndefined();
    expect(one!.openedS).toBeLessThan(3.2);
    expect(one!.evidence).toMatchObject({ fromState: '10', toState: '00', skips: 6 });
  });

  it('are not found where an edge is late only, nor where a shaft steps back', () => {
    expect(found(holding(pair, 0.003), pair)).toEqual([]);
    // Stops over an edge, goes a third of a tooth back and on again, twice a second.
    const turnsAt = (t: number) => {
      const into = t % 0.5;
      const back = into < 0.2 ? 0 : into < 0.25 ? -(into - 0.2) / 1.5 : into < 0.3 ? -(0.3 - into) / 1.5 : 0;
      return 0.5 * Math.floor(t / 0.5) + Math.min(into, 0.2) * 2.5 + back;
    };
    expect(found(ringVolts({ ...pair, turnsAt }), pair)).toEqual([]);
  });

  it('are found on three lines, and all low or all high is named', () => {
    const list = found(ringVolts({ ...three, placesDeg: [0, 60, 120] }), three, 'three-hall');
    expect(list[0]).toMatchObject({ severity: 'fault' });
    expect(['000', '111']).toContain(list[0]!.evidence.toState);
    expect(list[0]!.openedS).toBeLessThan(2);
  });

  it('are not found on sound pairs and sets, whatever they do', () => {
    const busy = speeds([0, 0], [1, 8], [2, 8], [3, 0], [3.5, 0], [4, -8], [5, -8], [5.5, 6], [8, 6]);
    const swing = (t: number) => 0.3 * Math.sin(2 * Math.PI * 2 * t);
    for (const turnsAt of [busy, swing, (t: number) => 0.05 * t]) {
      for (const noiseV of [0, 0.04]) {
        for (const shape of ['sine', { duty: [0.47, 0.5, 0.53] }] as const) {
          const more = { turnsAt, noiseV, shape, unevenness: 0.01 };
          expect(found(ringVolts({ ...pair, ...more }), pair)).toEqual([]);
          expect(found(ringVolts({ ...three, ...more }), three, 'three-hall')).toEqual([]);
        }
      }
    }
  });

  it('are not made of hum on lines at rest, nor of the first teeth after it', () => {
    const rig = testRig('quadrature', 12);
    for (const { sensor } of rig.channels) sensor.supplyV = 5;
    const hums: Ring = {
      ...pair,
      shape: 'sine',
      placesDeg: [0, 96],
      // Both lines rest within their hum.
      turnsAt: speeds([0, 0], [2, 0], [4, 3], [8, 3]),
      spoil: (volts, channel, t) =>
        1.65 +
        (channel === 1 && t < 2 ? 0 : volts - 1.65) +
        0.03 * Math.sin(2 * Math.PI * (channel ? 60 : 50) * t),
    };
    const codes = watchFindings(rig, pair.rateHz, {}, ...ringVolts(hums)).map(({ code }) => code);
    expect(codes).not.toContain('illegal-state');
    expect(codes).not.toContain('direction-flip');
  });

  it('are not made of lost samples', () => {
    const arrays = ringVolts(pair);
    const pipeline = testPipeline(testRig('quadrature', 12), pair.rateHz);
    const seen = new Set<string>();
    for (let at = 0; at + 1000 <= arrays[0]!.length; at += 1000) {
      // A tenth of a second out of two is lost, some odd part of a tooth.
      if ((at / 1000) % 2 === 1) pipeline.skip(1000, false);
      else
        pipeline.process(
          arrays.map((array) => array.subarray(at, at + 1000)),
          1000,
        );
      for (const { code } of pipeline.status().findings) seen.add(code);
    }
    expect(seen).not.toContain('illegal-state');
    expect(seen).toContain('lost-samples');
  });

  it('follow from lines that stand nearly in phase, and the direction that flips follows from either', () => {
    const nearly = { ...pair, placesDeg: [0, 176], shape: 'sine', noiseV: 0.05 } as const;
    const list = watchFindings(testRig('quadrature', 12), pair.rateHz, {}, ...ringVolts(nearly));
    const causeOf = (code: string) => list.find((one) => one.code === code)?.causedBy;
    expect(causeOf('illegal-state')).toBe('phase-error');
    expect(['phase-error', 'illegal-state']).toContain(causeOf('direction-flip'));
  });
});
