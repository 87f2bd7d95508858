import { describe, expect, it } from 'vitest';
import { ringVolts, speeds } from '@/signal/findings/test-rings';
import type { Ring } from '@/signal/findings/test-rings';
import { watchFindings } from '@/signal/findings/test-watch';
import type { RigSetup } from '@/signal/model';
import { testRig } from '@/signal/test-signals';

const rateHz = 5000;
const one: Ring = { rateHz, seconds: 4, positions: 10, turnsAt: (t) => t, placesDeg: [0], shape: 'sine' };
const pair: Ring = { ...one, placesDeg: [0, 90] };
const three: Ring = { ...one, placesDeg: [0, 120, 240] };
/** So many samples a tooth, after a run up to that speed within half a second. */
const at = (samples: number) => ({ turnsAt: speeds([0, 5], [0.5, rateHz / (samples * 10)]) });

function found(ring: Ring, rig: RigSetup = testRig('single', 10)) {
  return watchFindings(rig, rateHz, {}, ...ringVolts(ring)).filter(({ code }) => code === 'near-alias');
}

describe('few samples a tooth', () => {
  it('are a warning below 10 and a fault below 5, with what is there', () => {
    const [warning] = found({ ...one, ...at(8.3) });
    expect(warning).toMatchObject({ channel: 'A', severity: 'warn', outcome: 'found' });
    expect(warning!.evidence.samplesPerTooth).toBeCloseTo(8.3, 1);
    expect(warning!.openedS).toBeLessThan(2);
    expect(warning!.remedy).toContain('folded');
    expect(found({ ...one, ...at(4.2) })[0]).toMatchObject({ severity: 'fault' });
  });

  it('are counted by state where there is a ring of them', () => {
    expect(found({ ...pair, ...at(11) }, testRig('quadrature', 10))).toEqual([]);
    expect(found({ ...three, ...at(14) }, testRig('three-hall', 10))).toEqual([]);
    const [narrow] = found({ ...three, ...at(11) }, testRig('three-hall', 10));
    // The rate is that of all channels.
    expect(narrow).toMatchObject({ channel: null, severity: 'warn' });
    expect(narrow!.evidence.samplesOfNarrowestState).toBeCloseTo(11 / 6, 1);
    const [uneven] = found({ ...pair, ...at(12), placesDeg: [0, 145] }, testRig('quadrature', 10));
    expect(uneven!.evidence.samplesOfNarrowestState).toBeCloseTo(1.5, 1);
  });

  it('come with the speed and go with it', () => {
    const turnsAt = speeds([0, 20], [3, 20], [4, 70], [7, 70], [8, 20], [12, 20]);
    const [seen, more] = found({ ...one, seconds: 12, turnsAt });
    expect(more).toBeUndefined();
    expect(seen!.openedS).toBeGreaterThan(3.4);
    expect(seen!.openedS).toBeLessThan(5);
    expect(seen!.to).toBeGreaterThan(7);
    expect(seen!.to).toBeLessThan(8.5);
  });

  it('are not seen where bounce or a start makes short intervals, nor on a narrow pulse of enough samples', () => {
    const bounces = (volts: number, _channel: number, t: number) =>
      (t * 50) % 1 < 0.1 && Math.floor(t * rateHz) % 2 ? 0.2 : volts;
    const square: Ring = { ...one, turnsAt: (t) => 5 * t, shape: { duty: [0.5] }, spoil: bounces };
    expect(found(square).filter(({ causedBy }) => causedBy === null)).toEqual([]);
    expect(found({ ...one, turnsAt: speeds([0, 0], [4, 30]) })).toEqual([]);
    expect(found({ ...one, ...at(40), shape: { duty: [0.1] } })).toEqual([]);
    expect(found({ ...one, ...at(12), noiseV: 0.04, unevenness: 0.01 })).toEqual([]);
  });

  it('at the rated speed are a note while the shaft turns more slowly', () => {
    const rated = testRig('single', 10, 0, { ratedRpm: 6000 });
    const [note] = found({ ...one, ...at(50) }, rated);
    expect(note).toMatchObject({ severity: 'note', evidence: { samplesPerTooth: 5, ratedRpm: 6000 } });
    expect(found({ ...one, ...at(50) }, testRig('single', 10, 0, { ratedRpm: 1500 }))).toEqual([]);
    expect(found({ ...one, ...at(6) }, rated)[0]).toMatchObject({ severity: 'warn' });
  });

  it('of a coded pulse are a fault at once, without any edge', () => {
    const coded = testRig('width-coded', 10);
    const widthClasses = [
      { widthS: 0.000_09, means: 'forward' },
      { widthS: 0.000_18, means: 'reverse' },
    ] as const;
    const rig = { ...coded, wheel: { ...coded.wheel, widthClasses: [...widthClasses] } };
    const [seen] = found({ ...one, turnsAt: () => 0 }, rig);
    expect(seen).toMatchObject({ severity: 'fault', openedS: 0.1 });
    expect(seen!.evidence.neededHz).toBeCloseTo(44_444, 0);
    const slow = {
      ...rig.wheel,
      widthClasses: widthClasses.map((width) => ({ ...width, widthS: 20 * width.widthS })),
    };
    expect(found({ ...one, turnsAt: () => 0 }, { ...rig, wheel: slow })).toEqual([]);
  });
});
