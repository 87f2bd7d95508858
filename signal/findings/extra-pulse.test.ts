import { describe, expect, it } from 'vitest';
import { watchFindings } from '@/signal/findings/test-watch';
import type { RigSetup } from '@/signal/model';
import { normal, sampled, seeded, testRig, toothWheel } from '@/signal/test-signals';

const rateHz = 10_000;
type Volts = (t: number) => number;

/** As high as a tooth, a tenth of a pitch wide, at `place` (in positions) of a wheel that turns ten times a second. */
function burr(
  volts: Volts,
  positions: number,
  place: number,
  isThere: (t: number) => boolean = () => true,
): Volts {
  return (t) => {
    const at = (10 * t * positions) % positions;
    return Math.abs(at - place) < 0.06 && isThere(t) ? Math.max(volts(t), 2.5) : volts(t);
  };
}

function extra(rig: RigSetup, seconds: number, ...volts: Volts[]) {
  const arrays = volts.map((at) => sampled(seconds * rateHz, rateHz, at));
  return watchFindings(rig, rateHz, {}, ...arrays).filter(({ code }) => code === 'extra-pulse');
}

const turning = (t: number) => 10 * t;

describe('an extra pulse', () => {
  it('at one place of the wheel is found with that place, and let go when it is gone', () => {
    const volts = burr(toothWheel(24, 0, turning), 24, 9, (t) => t > 2 && t < 4);
    const [finding, ...more] = extra(testRig('single', 24), 9, volts);
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ channel: 'A', severity: 'fault', outcome: 'found' });
    expect(finding!.evidence).toMatchObject({ where: 'one place', numbering: 'relative', positions: 24 });
    // Teeth rise a quarter of a pitch after their place begins, so that tooth 8 is the one before.
    expect(finding!.evidence.afterPosition).toBe(8);
    expect(finding!.evidence.pitchPercent).toBeCloseTo(69, -1);
    expect(finding!.from).toBeCloseTo(2 + 9 / 240, 1);
    expect(finding!.openedS).toBeLessThan(2.3);
    expect((finding!.at * 10) % 1).toBeCloseTo(9 / 24, 1);
    expect(finding!.to!).toBeLessThan(4.5);
  });

  it.each([
    ['between teeth of a wheel with a gap', 60, 2, 20],
    ['within the gap', 60, 2, 58.6],
    ['between teeth of a wheel with a gap of one', 36, 1, 20],
    ['on a wheel of few teeth', 4, 0, 2],
  ])('is found %s', (_name, positions, lacking, place) => {
    const volts = burr(toothWheel(positions, lacking, turning), positions, place, (t) => t > 1);
    const [finding, ...more] = extra(testRig('single', positions, lacking), 4, volts);
    expect(more).toEqual([]);
    expect(finding!.evidence.where).toBe('one place');
    expect(finding!.openedS).toBeLessThan(1.8);
    const { afterPosition, pitchPercent, numbering } = finding!.evidence;
    expect(Math.abs(Number(afterPosition) + Number(pitchPercent) / 100 - (place - 0.3))).toBeLessThan(0.15);
    expect(numbering).toBe(lacking > 0 ? 'from the gap' : 'relative');
  });

  it('is found on a channel of a quadrature pair', () => {
    const a = toothWheel(24, 0, turning);
    const b = toothWheel(24, 0, (t) => turning(t) - 0.25 / 24);
    const found = extra(testRig('quadrature', 24), 3, a, burr(b, 24, 9.3));
    expect(found.map(({ channel }) => channel)).toEqual(['B']);
  });

  it('stands at the same place of a wheel with a gap whichever way it turns', () => {
    for (const sign of [1, -1]) {
      const rim = (t: number) => 100.3 + sign * 10 * t;
      const sound = (turns: (t: number) => number) => toothWheel(36, 1, turns);
      const withBurr = (turns: (t: number) => number): Volts => {
        const volts = sound(turns);
        return (t) => (Math.abs(((36 * turns(t)) % 36) - 9) < 0.06 ? 2.5 : volts(t));
      };
      const found = extra(
        testRig('quadrature', 36, 1),
        4,
        withBurr(rim),
        withBurr((t) => rim(t) - 0.25 / 36),
      );
      const [a] = found.filter(({ channel }) => channel === 'A');
      expect(a!.evidence).toMatchObject({ where: 'one place', numbering: 'from the gap', afterPosition: 8 });
    }
  });

  it('is told by its place from the third turn on', () => {
    const sound = toothWheel(24, 0, turning);
    const burrFor = (turns: number) =>
      extra(
        testRig('single', 24),
        4,
        burr(sound, 24, 9, (t) => t > 2 && t < 2 + turns / 10),
      )[0]!.evidence;
    expect(burrFor(2)).toMatchObject({ where: 'anywhere', pulses: 2 });
    expect(burrFor(3)).toMatchObject({ where: 'one place', turns: 3 });
  });

  it('that came once is a note at once, as the whole pitch around it proves it, and goes', () => {
    const sound = toothWheel(24, 0, turning);
    const spike = (from: number) => (t: number) => (t > from && t < from + 0.0003 ? 2.6 : sound(t));
    // Teeth rise at a quarter of a pitch, and fall at three.
    const [finding, ...more] = extra(testRig('single', 24), 8, spike(2 + 9 / 240));
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ severity: 'note', outcome: 'found' });
    expect(finding!.evidence).toMatchObject({ where: 'anywhere', pulses: 1 });
    expect(finding!.openedS).toBeLessThan(2.3);
    expect(finding!.from).toBeCloseTo(2 + 9 / 240, 3);
    expect(finding!.to!).toBeLessThan(5.3);
    // Within a tenth of a pitch of a flank it may be bounce of that one.
    expect(extra(testRig('single', 24), 8, spike(2 + 9.2 / 240))).toEqual([]);
  });

  it('that came once beside a gap of the wheel proves nothing', () => {
    const sound = toothWheel(24, 1, turning);
    const once = (place: number) => (t: number) =>
      t > 2 + place / 240 && t < 2 + place / 240 + 0.0003 ? 2.6 : sound(t);
    // Tooth 22 is the last before the gap, and tooth 0 the first after it.
    for (const place of [22, 24]) expect(extra(testRig('single', 24, 1), 5, once(place))).toEqual([]);
    expect(extra(testRig('single', 24, 1), 5, once(12))).toHaveLength(1);
  });

  it('now and then anywhere is worth a warning, for as long as it is told', () => {
    // 2.3 turns apart, so that each comes at another place.
    const spikes = (t: number) => t > 2 && t < 6 && (t * 10) % 2.3 < 0.003;
    const sound = toothWheel(24, 0, turning);
    const [finding, ...more] = extra(testRig('single', 24), 12, (t) => (spikes(t) ? 2.6 : sound(t)));
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ severity: 'warn', evidence: { where: 'anywhere' } });
    expect(finding!.openedS).toBeLessThan(4.6);
    expect(finding!.to!).toBeLessThan(9.5);
  });

  it('is not said of bounce behind every flank, of starts and stops, nor of noise on a sound wheel', () => {
    const bouncing: Volts = (t) => {
      const phase = (240 * t) % 1;
      return phase < 0.5 && !(phase > 0.05 && phase < 0.1) ? 3 : 0.2;
    };
    expect(extra(testRig('single', 24), 4, bouncing)).toEqual([]);
    const random = normal(seeded(7));
    const places = Array.from({ length: 24 }, () => 0.01 * random());
    for (const motion of [
      (t: number) => (t % 4 < 1 ? 5 * (t % 4) ** 2 : t % 4 < 2 ? 5 + 10 * ((t % 4) - 1) : 15),
      (t: number) => 9 * Math.sin(t),
      (t: number) => 10 * t + Math.sin(2 * Math.PI * t) / Math.PI,
    ]) {
      for (const lacking of [0, 1, 2]) {
        const volts = toothWheel(24, lacking, (t) => {
          const place = 24 * motion(t);
          return (place + places[((Math.floor(place) % 24) + 24) % 24]!) / 24;
        });
        const found = extra(testRig('single', 24, lacking), 9, (t) => volts(t) + 0.04 * random());
        expect(found).toEqual([]);
      }
    }
  });
});
