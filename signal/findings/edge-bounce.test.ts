import { describe, expect, it } from 'vitest';
import { ringVolts } from '@/signal/findings/test-rings';
import { watchFindings } from '@/signal/findings/test-watch';
import type { Finding, Settings } from '@/signal/model';
import { normal, sampled, seeded, testPipeline, testRig, toothWheel } from '@/signal/test-signals';

const rateHz = 10_000;

function bounces(volts: Float64Array, rig = testRig('single', 8)): Finding[] {
  const pipeline = testPipeline(rig, rateHz);
  const found: Finding[] = [];
  for (let at = 0; at < volts.length; at += 1000) {
    pipeline.process([volts.subarray(at, at + 1000)], Math.min(1000, volts.length - at));
    found.push(...pipeline.output.closedFindings);
    pipeline.drain();
  }
  return [...found, ...pipeline.status().findings].filter(({ code }) => code === 'edge-bounce');
}

/** A square of 100 Hz whose rising flank drops back for half a millisecond while `bouncing`. */
function square(t: number, bouncing: boolean): number {
  const phase = (t * 100) % 1;
  const high = phase < 0.5 && !(bouncing && phase > 0.05 && phase < 0.1);
  return high ? 3 : 0.2;
}

describe('edge bounce', () => {
  it('is found while flanks bounce, with how soon the second edge comes, and ends with it', () => {
    const found = bounces(sampled(60_000, rateHz, (t) => square(t, t > 2 && t < 4)));
    expect(found).toHaveLength(1);
    const { from, to, at, evidence, severity } = found[0]!;
    expect(severity).toBe('fault');
    expect(from).toBeGreaterThan(1.6);
    expect(from).toBeLessThan(2.4);
    expect(to).toBeGreaterThan(3.6);
    expect(to).toBeLessThan(4.6);
    expect(at).toBeGreaterThan(2);
    expect(at).toBeLessThan(3);
    expect(evidence.shortestS).toBeCloseTo(0.001, 3);
    expect(evidence.toothS).toBeCloseTo(0.009, 3);
  });

  it('is found where few teeth come, and not all of them bounce', () => {
    // 13 teeth a second; the flank of every fifth drops back for 2 ms, at another place of the wheel each turn.
    const seldom = (every: number) => (t: number) => {
      const tooth = Math.floor(13 * t);
      const phase = 13 * t - tooth;
      const bouncing = t > 3 && t < 7 && tooth % every === 0;
      return phase < 0.5 && !(bouncing && phase > 0.05 && phase < 0.08) ? 3 : 0.2;
    };
    const [finding, ...more] = bounces(sampled(120_000, rateHz, seldom(5)));
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ severity: 'warn', outcome: 'found' });
    expect(finding!.evidence.shortPercent).toBeGreaterThan(5);
    expect(finding!.evidence.shortPercent).toBeLessThan(20);
    expect(finding!.to!).toBeGreaterThan(6);
    expect(finding!.to!).toBeLessThan(9);
    expect(bounces(sampled(120_000, rateHz, seldom(29)))).toEqual([]);
  });

  it('is not said of a steady wheel, of a start from rest, nor of a sudden stop', () => {
    expect(bounces(sampled(40_000, rateHz, (t) => square(t, false)))).toEqual([]);
    const motion = (t: number) => (t < 1 ? 0 : t < 3 ? 15 * (t - 1) ** 2 : 60 + 60 * (Math.min(t, 5) - 3));
    expect(bounces(sampled(70_000, rateHz, (t) => 1.6 + Math.sin(2 * Math.PI * motion(t))))).toEqual([]);
    const gapped = toothWheel(36, 2, (t) => 8 * t);
    expect(bounces(sampled(40_000, rateHz, gapped), testRig('single', 36, 2))).toEqual([]);
  });

  it('is found on the falling flank, and on the second channel of a pair', () => {
    const falling = (t: number) => {
      const phase = (t * 100) % 1;
      return phase < 0.5 || (phase > 0.55 && phase < 0.6) ? 3 : 0.2;
    };
    const [one] = bounces(sampled(40_000, rateHz, falling));
    expect(one).toMatchObject({ channel: 'A', severity: 'fault' });
    const second = (volts: number, channel: number, t: number) =>
      channel === 1 && (t * 48) % 1 > 0.27 && (t * 48) % 1 < 0.3 ? 0.2 : volts;
    const pair = { rateHz, seconds: 4, positions: 12, turnsAt: (t: number) => 4 * t, placesDeg: [0, 90] };
    const arrays = ringVolts({ ...pair, shape: { duty: [0.5, 0.5] }, spoil: second });
    const list = watchFindings(testRig('quadrature', 12), rateHz, {}, ...arrays);
    const ofPair = list.filter(({ code }) => code === 'edge-bounce');
    expect(ofPair.map(({ channel }) => channel)).toEqual(['B']);
    expect(ofPair[0]!.message).toContain('net count');
  });

  it('is a warning where few flanks bounce', () => {
    // Every twelfth tooth, on a wheel of seven: at no fixed place.
    const seldom = (t: number) => square(t, Math.floor(t * 100) % 12 === 0);
    const [one] = bounces(sampled(60_000, rateHz, seldom), testRig('single', 7));
    expect(one).toMatchObject({ severity: 'warn' });
    expect(one!.evidence.shortPercent).toBeLessThan(12);
  });

  it('is not what comes at one or two places of the wheel, turn after turn', () => {
    const burr = (places: number[]) => (t: number) => square(t, places.includes(Math.floor(t * 100) % 8));
    expect(bounces(sampled(60_000, rateHz, burr([3])))).toEqual([]);
    expect(bounces(sampled(60_000, rateHz, burr([1, 4])))).toEqual([]);
  });

  it('is a note where the band or the hold-off keeps it back', () => {
    // Back to 1.4 V: below the middle of the band, above its release point.
    const within = (t: number, on: boolean) => {
      const phase = (t * 100) % 1;
      return phase < 0.5 ? (on && phase > 0.05 && phase < 0.1 ? 1.4 : 3) : 0.2;
    };
    const volts = sampled(80_000, rateHz, (t) => within(t, t > 2 && t < 4));
    const fixed = { mode: 'fixed', operateV: 2, releaseV: 1.2 } as const;
    const held = (array: Float64Array, settings: Partial<Settings>) =>
      watchFindings(testRig('single', 8), rateHz, settings, array).filter(
        ({ code }) => code === 'edge-bounce',
      );
    const [byBand, more] = held(volts, { band: fixed });
    expect(more).toBeUndefined();
    expect(byBand).toMatchObject({ severity: 'note' });
    expect(byBand!.evidence.heldBackPercent).toBeGreaterThan(20);
    expect(byBand!.evidence.heldBackPercent).toBeLessThan(51);
    expect(byBand!.openedS).toBeLessThan(4);
    expect(byBand!.to).toBeLessThan(5.2);
    const bouncing = sampled(60_000, rateHz, (t) => square(t, true));
    const [byHoldoff] = held(bouncing, { holdoffS: 0.0015, band: fixed });
    expect(byHoldoff).toMatchObject({ severity: 'note', to: null });
  });

  it('is not noted of noise, of a weak tooth that stays in the band, nor of a hold-off that eats teeth', () => {
    const gauss = normal(seeded(5));
    for (const rmsV of [0.04, 0.07, 0.12]) {
      const noisy = sampled(60_000, rateHz, (t) => 1.65 + Math.sin(2 * Math.PI * 60 * t) + rmsV * gauss());
      expect(bounces(noisy)).toEqual([]);
    }
    const weak = (t: number) =>
      1.65 + (Math.floor(t * 60) % 8 === 3 ? 0.15 : 1) * Math.sin(2 * Math.PI * 60 * t);
    expect(bounces(sampled(60_000, rateHz, weak))).toEqual([]);
    const list = watchFindings(
      testRig('single', 8),
      rateHz,
      { holdoffS: 0.006 },
      sampled(60_000, rateHz, (t) => square(t, false)),
    );
    expect(list.map(({ code }) => code)).not.toContain('edge-bounce');
  });
});
