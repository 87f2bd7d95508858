import { describe, expect, it } from 'vitest';
import { codesOf, watchFindings } from '@/signal/findings/test-watch';
import type { RigSetup } from '@/signal/model';
import { normal, sampled, seeded, testChannel, testRig } from '@/signal/test-signals';

const rateHz = 10_000;

type Motion = (t: number) => number;
const steady: Motion = (t) => 10 * t;

/** Volts over a wheel of soft teeth; `strength` of the tooth at a position in a turn, 1 as built. */
function wheel(
  positions: number,
  strength: (position: number, turn: number, t: number) => number,
  turnsAt = steady,
) {
  return (t: number) => {
    const place = turnsAt(t) * positions;
    const whole = Math.floor(place);
    const position = ((whole % positions) + positions) % positions;
    const height = strength(position, Math.floor(whole / positions), t);
    return 0.65 + height * (1 - Math.cos(2 * Math.PI * place));
  };
}

function missing(rig: RigSetup, seconds: number, ...volts: ((t: number) => number)[]) {
  const arrays = volts.map((at) => sampled(seconds * rateHz, rateHz, at));
  return watchFindings(rig, rateHz, {}, ...arrays).filter(({ code }) => code === 'missing-tooth');
}

describe('a missing tooth', () => {
  it('is found after three turns, at its place, and let go when it is back', () => {
    const gone = (position: number, _turn: number, t: number) => (position === 7 && t > 2 && t < 4 ? 0 : 1);
    const [finding, ...more] = missing(testRig('single', 24), 8, wheel(24, gone));
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ channel: 'A', severity: 'fault', outcome: 'found' });
    expect(finding!.evidence).toMatchObject({ position: 7, numbering: 'relative' });
    expect(finding!.from).toBeCloseTo(2 + 7.25 / 240, 2);
    expect(finding!.openedS - finding!.from).toBeGreaterThan(0.2);
    expect(finding!.openedS - finding!.from).toBeLessThan(0.5);
    expect((finding!.at * 240) % 24).toBeCloseTo(7.25, 0);
    expect(finding!.to!).toBeGreaterThan(3.9);
    expect(finding!.to!).toBeLessThan(4.5);
  });

  it.each([
    ['one of a wheel with a gap', 60, 2, [20]],
    ['the first after the gap', 60, 2, [0]],
    ['the last before the gap', 60, 2, [57]],
    ['the first after a gap of one', 36, 1, [0]],
    ['the last before a gap of one', 36, 1, [34]],
    ['a tooth like the gap', 36, 1, [12]],
    ['two, with one between', 24, 0, [6, 8]],
    ['one of four', 4, 0, [2]],
  ])('is found: %s', (_name, positions, lacking, gone) => {
    const strength = (position: number, _turn: number, t: number) =>
      position >= positions - lacking || (gone.includes(position) && t > 1) ? 0 : 1;
    const found = missing(testRig('single', positions, lacking), 3, wheel(positions, strength));
    expect(found.map(({ evidence }) => evidence.position)).toEqual(gone);
    for (const { openedS, evidence } of found) {
      expect(openedS).toBeLessThan(1.7);
      expect(evidence.numbering).toBe(lacking > 0 ? 'from the gap' : 'relative');
    }
  });

  it('is numbered by an index', () => {
    const single = testRig('single', 24);
    const rig = { ...single, channels: [...single.channels, testChannel('Z', 'Z')] };
    // Its leading flank comes half a pitch before tooth 3 of the wheel as it starts.
    const index = (t: number) => ((10 * t - 2.75 / 24 + 1) % 1 < 0.02 ? 3 : 0.3);
    const gone = (position: number, _turn: number, t: number) => (position === 7 && t > 2 ? 0 : 1);
    const found = missing(rig, 4, wheel(24, gone), index);
    expect(found.map(({ evidence }) => evidence)).toMatchObject([
      { position: 4, numbering: 'from the index' },
    ]);
    expect(found[0]!.message).toContain('Tooth 4 of 24');
  });

  it('beside the gap from the start is found, and said to be one of two', () => {
    const strength = (position: number) => (position >= 34 ? 0 : 1);
    const [finding] = missing(testRig('single', 36, 1), 3, wheel(36, strength));
    expect(finding!.evidence).toMatchObject({
      position: 34,
      numbering: 'from the gap, since it went missing',
    });
    expect(finding!.remedy).toContain('gap');
  });

  it('that shows every second turn is found too', () => {
    const strength = (position: number, turn: number) => (position === 7 && turn % 2 === 0 ? 0 : 1);
    const found = missing(testRig('single', 24), 5, wheel(24, strength));
    expect(found.map(({ evidence }) => evidence.position)).toEqual([7]);
  });

  it('is found in quadrature, by both channels or by the one that it escapes', () => {
    const gone = (position: number) => (position === 5 ? 0 : 1);
    const sound = () => 1;
    const b = (strength: () => number) => (t: number) => wheel(24, strength)(t - 0.25 / 240);
    const rig = testRig('quadrature', 24);
    const both = missing(rig, 3, wheel(24, gone), b(gone as () => number));
    expect(both.map(({ channel }) => channel).sort()).toEqual(['A', 'B']);
    const onlyB = missing(rig, 3, wheel(24, sound), b(gone as () => number));
    expect(onlyB.map(({ channel }) => channel)).toEqual(['B']);
    const onlyA = missing(rig, 3, wheel(24, gone), b(sound));
    expect(onlyA.map(({ channel }) => channel)).toEqual(['A']);
  });

  const motions: [string, Motion][] = [
    ['starts and stops', (t) => (t % 4 < 1 ? 5 * (t % 4) ** 2 : t % 4 < 2 ? 5 + 10 * ((t % 4) - 1) : 15)],
    ['ramps', (t) => 2 * t + 8 * t * t],
    ['a sway of a fifth of the speed', (t) => 10 * t + Math.sin(2 * Math.PI * t) / Math.PI],
    ['a crawl', (t) => 0.4 * t],
    ['a shaft that turns back', (t) => 8 * Math.sin(t)],
  ];
  it.each(motions)('is not said of %s', (_name, turnsAt) => {
    const random = normal(seeded(11));
    const places = Array.from({ length: 24 }, () => 0.01 * random());
    const bent = (t: number) => {
      const place = turnsAt(t) * 24;
      return (place + places[((Math.floor(place) % 24) + 24) % 24]!) / 24;
    };
    const noisy = (volts: (t: number) => number) => (t: number) => volts(t) + 0.04 * random();
    for (const [rig, lacking] of [
      [testRig('single', 24), 0],
      [testRig('single', 24, 2), 2],
    ] as const) {
      const strength = (position: number) => (position >= 24 - lacking ? 0 : 1);
      expect(missing(rig, 8, noisy(wheel(24, strength, bent)))).toEqual([]);
    }
    const b: Motion = (t) => bent(t) - 0.25 / 24;
    const pair = [bent, b].map((at) => noisy(wheel(24, () => 1, at)));
    expect(missing(testRig('quadrature', 24), 8, ...pair)).toEqual([]);
  });

  it('is not said where the wheel was set up with another number of teeth', () => {
    for (const [made, lacking, told] of [
      [22, 0, testRig('single', 24)],
      [36, 1, testRig('single', 35)],
      [36, 1, testRig('single', 60, 2)],
      [24, 0, testRig('single', 36, 1)],
    ] as const) {
      const strength = (position: number) => (position >= made - lacking ? 0 : 1);
      expect(missing(told, 5, wheel(made, strength))).toEqual([]);
    }
  });

  it('is not said of a wheel that lacks many: that is bounce or a wrong count', () => {
    const found = watchFindings(
      testRig('single', 24),
      rateHz,
      {},
      sampled(
        3 * rateHz,
        rateHz,
        wheel(24, (position) => (position % 3 === 0 ? 0 : 1)),
      ),
    );
    expect(codesOf(found)).not.toContain('missing-tooth');
  });
});
