import { describe, expect, it } from 'vitest';
import { normal, seeded } from '@/signal/test-signals';
import { createToothLog } from '@/signal/tooth-log';
import { WheelPattern } from '@/signal/wheel-pattern';

type Tooth = { place: number; swing: number };
const random = normal(seeded(17));

function roughWheel(teeth: number, rms = 0.005, swingRms = 0.02): Tooth[] {
  return Array.from({ length: teeth }, (_, k) => ({
    place: k + rms * random(),
    swing: 1 + swingRms * random(),
  }));
}

/** What the pattern says of a wheel that is told to have `told` positions, after so many turns. */
function verdictOf(
  wheel: Tooth[],
  told: number,
  turns: number,
  more: { noise?: number; sway?: number; gear?: number; hum?: number } = {},
) {
  const { noise = 0.001, sway = 0, gear = 1.5, hum = 0 } = more;
  const log = createToothLog(told, 64);
  const pattern = new WheelPattern(told, true);
  const n = wheel.length;
  const made = n;
  let looks = 0;
  for (let k = 0; k < n * turns; k++) {
    const { place, swing } = wheel[k % n]!;
    const turn = Math.floor(k / n) + place / n;
    const i = log.count++ & log.mask;
    log.riseS[i] =
      turn + (sway / (2 * Math.PI * gear)) * Math.sin(2 * Math.PI * gear * turn) + (noise / n) * random();
    log.sigmaS[i] = noise / n;
    log.troughV[i] = 0;
    // A tone at five for four of the turn's own multiples, as hum is that the teeth are locked to.
    const tone = hum * Math.sin(2 * Math.PI * 1.25 * (made / 4) * turn);
    log.riseS[i] = log.riseS[i]! + tone / n;
    log.peakV[i] = swing + tone + noise * random();
    if (k % 50 === 0 && pattern.read(log)) looks++;
  }
  return { looks, verdict: pattern.verdict };
}

describe('the pattern of a wheel', () => {
  it.each([
    [48, 24],
    [24, 48],
    [36, 24],
    [24, 36],
    [12, 24],
    [30, 24],
  ])('tells a wheel of %d teeth that is set up as one of %d', (made, told) => {
    const { verdict } = verdictOf(roughWheel(made), told, 200);
    expect(verdict).toMatchObject({ lag: made, by: 'spacing' });
    expect(verdict!.correlation).toBeGreaterThan(0.7);
    expect(verdict!.correlationAsSet).toBeLessThan(made < told && told % made === 0 ? 1 : 0.5);
    expect(verdict!.turns).toBeGreaterThanOrEqual(8);
  });

  it('tells it by the swing where the spacing is even', () => {
    expect(verdictOf(roughWheel(48, 0), 24, 100).verdict).toMatchObject({ lag: 48, by: 'swing' });
  });

  it('says nothing of a wheel that is set up as it is made: rough, even, swaying with a geared shaft, alternating', () => {
    for (const made of [12, 24, 60]) {
      const alternating = roughWheel(made).map(({ place, swing }, k) => ({
        place: place + (k % 2 === 0 ? 0.1 : 0),
        swing: swing * (k % 2 === 0 ? 1.3 : 1),
      }));
      for (const wheel of [roughWheel(made), roughWheel(made, 0, 0), alternating]) {
        for (const more of [
          {},
          { noise: 0.02 },
          { sway: 0.03 },
          { sway: 0.02, gear: 2 },
          { sway: 0.02, gear: 0.5 },
        ]) {
          const { looks, verdict } = verdictOf(wheel, made, 150, more);
          expect(verdict).toBeNull();
          expect(looks).toBeGreaterThan(0);
        }
      }
    }
  });

  it('does not halve a wheel whose halves are much alike', () => {
    const half = roughWheel(12);
    const wheel = [...half, ...half.map(({ place, swing }) => ({ place: place + 12, swing }))].map(
      ({ place, swing }) => ({ place: place + 0.001 * random(), swing }),
    );
    expect(verdictOf(wheel, 24, 200, { noise: 0.0003 }).verdict?.by).not.toBe('spacing');
  });

  it('begins anew where teeth are missing', () => {
    const wheel = roughWheel(24).filter((_, k) => k !== 5);
    expect(verdictOf(wheel, 24, 100)).toEqual({ looks: 0, verdict: null });
  });
});
