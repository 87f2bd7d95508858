import { describe, expect, it } from 'vitest';
import { BurstTone } from '@/signal/findings/burst-tone';
import { RingTone } from '@/signal/findings/ring-tone';
import { isMains, unfoldedHz } from '@/signal/findings/tone-place';
import { burstLength, createNoiseMeter } from '@/signal/noise';
import { createSlowRing, keepSlow } from '@/signal/slow-ring';
import { normal, sampled, seeded } from '@/signal/test-signals';

/** After `count` bursts of a signal, which lie 1000 samples apart. */
function burstsOf(volts: (sample: number) => number, count = 10, leastV = 0): BurstTone {
  const tone = new BurstTone();
  const meter = createNoiseMeter();
  for (let k = 0; k < count; k++) {
    for (let i = 0; i < burstLength; i++) meter.burst[i] = volts(1000 * k + i);
    meter.seen++;
    tone.take(meter, leastV);
  }
  return tone;
}

const sine = (cyclesPerSample: number) => (i: number) => Math.sin(2 * Math.PI * cyclesPerSample * i + 0.3);

describe('a tone of few samples', () => {
  it.each([0.11, 0.2, 0.2741, 0.3333, 0.45])(
    'of %s cycles a sample shows where and how large it is',
    (cycles) => {
      const noise = normal(seeded(1));
      const clean = burstsOf(sine(cycles));
      expect(clean.cyclesPerSample).toBeCloseTo(cycles, 2);
      expect(Math.abs(clean.swingV - 2)).toBeLessThan(0.2);
      // As much noise as signal.
      const noisy = burstsOf((i) => sine(cycles)(i) + 0.7 * noise(), 16);
      expect(Math.abs(noisy.cyclesPerSample - cycles)).toBeLessThan(0.02);
    },
  );

  it('is not seen in noise, in what is slower, nor before there are six bursts', () => {
    for (let seed = 1; seed <= 400; seed++) {
      const noise = normal(seeded(seed));
      expect(burstsOf(() => noise(), 12).cyclesPerSample).toBeNaN();
    }
    expect(burstsOf((i) => i % 1000).cyclesPerSample).toBeNaN();
    expect(burstsOf(sine(0.3), 5).cyclesPerSample).toBeNaN();
    expect(burstsOf(sine(0.3), 10, 3).cyclesPerSample).toBeNaN();
  });
});

describe('the strongest tone of a slow ring', () => {
  const ringHz = 1000;
  const ringOf = (volts: (t: number) => number) => {
    const ring = createSlowRing(ringHz);
    keepSlow(ring, sampled(2000, ringHz, volts), 0, 2000, 0);
    return ring;
  };
  const tone = new RingTone(ringHz);

  it.each([12.3, 83, 311.7, 487])('of %s Hz shows far below the noise', (hz) => {
    const noise = normal(seeded(2));
    expect(tone.look(ringOf((t) => 1 + 0.5 * Math.sin(2 * Math.PI * hz * t) + 0.7 * noise()))).toBe(true);
    expect(tone.hz).toBeCloseTo(hz, 0);
    expect(Math.abs(tone.swingV - 1)).toBeLessThan(0.15);
  });

  it('is not seen in noise or drift, nor while the ring holds too little', () => {
    for (let seed = 1; seed <= 100; seed++) {
      const noise = normal(seeded(seed));
      tone.look(ringOf((t) => noise() + 5 * t));
      expect(tone.hz).toBeNaN();
    }
    const short = createSlowRing(ringHz);
    keepSlow(
      short,
      sampled(900, ringHz, () => 0),
      0,
      900,
      0,
    );
    expect(tone.look(short)).toBe(false);
  });
});

describe('where a tone comes from', () => {
  it('is told by bursts, as long as it makes a difference', () => {
    for (const hz of [300, 700, 1300]) {
      const folded = Math.abs(hz - 1000 * Math.round(hz / 1000));
      const bursts = burstsOf(sine(hz / 10_000));
      expect(unfoldedHz(folded, 1000, 10_000, 2000, 1, bursts)).toBeCloseTo(hz, 6);
    }
    const near = unfoldedHz(490, 1000, 10_000, 2000, 1, burstsOf(sine(0.051)));
    expect(Math.abs(near - 500)).toBeLessThan(12);
    // All the same to bursts that show a fraction of a cycle.
    expect(
      unfoldedHz(
        300,
        1000,
        1_000_000,
        200_000,
        0.5,
        burstsOf(() => 0),
      ),
    ).toBeNaN();
  });

  it('knows the mains and their folds', () => {
    expect(isMains(100.4, 1000, 0.6)).toBe(true);
    expect(isMains(101, 1000, 0.6)).toBe(false);
    expect(isMains(20, 160, 0.6)).toBe(true);
  });
});
