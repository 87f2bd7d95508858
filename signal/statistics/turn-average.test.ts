import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { farthest, issueOf, passes, valueOf } from '@/signal/statistics/test-values';
import { instantAt, toothPhase } from '@/signal/statistics/tooth-phase';
import { addTurn, createTurnAverage, readTurnAverage, resampleTurn } from '@/signal/statistics/turn-average';
import { normal, sampled, seeded } from '@/signal/test-signals';

const even8 = new Array<number>(8).fill(1 / 8);
const wave = (turns: number) =>
  1.65 + 0.5 * Math.cos(16 * Math.PI * turns) + 0.2 * Math.cos(2 * Math.PI * turns + 1);

describe('once-per-turn average', () => {
  it('gives the turn back from a shaft that speeds up', () => {
    const teeth = passes(even8, 5, 10, 3);
    const values = sampled(6000, 10_000, (t) => wave(10 * t + 1.5 * t * t));
    for (let turn = 0; turn < 4; turn++) {
      const found = valueOf(
        resampleTurn({ values, startS: 0, rateHz: 10_000 }, teeth.subarray(8 * turn, 8 * turn + 9), 64),
      );
      const wanted = Array.from({ length: 64 }, (_, k) => wave(k / 64));
      // Angle is linear between teeth: a speed that changes by 0.4 % a tooth bends it by a two-thousandth of a tooth.
      expect(farthest(found, wanted)).toBeLessThan(3e-3);
    }
  });

  it('follows uneven teeth where their shares are known', () => {
    const shares = [0.3, 0.2, 0.28, 0.22];
    const teeth = passes(shares, 1, 10, 0, 0.01);
    const values = sampled(2000, 10_000, (t) => Math.sin(2 * Math.PI * 10 * (t - 0.01)));
    const signal = { values, startS: 0, rateHz: 10_000 };
    const wanted = Array.from({ length: 40 }, (_, k) => Math.sin((2 * Math.PI * k) / 40));
    expect(farthest(valueOf(resampleTurn(signal, teeth, 40, shares)), wanted)).toBeLessThan(1e-5);
    expect(farthest(valueOf(resampleTurn(signal, teeth, 40)), wanted)).toBeGreaterThan(0.1);
  });

  it('leaves a quarter of the noise after 16 turns (1 / sqrt(M))', () => {
    const random = normal(seeded(16));
    let squares = 0;
    let scatter = 0;
    const runs = 50;
    for (let run = 0; run < runs; run++) {
      const average = valueOf(createTurnAverage(100));
      for (let turn = 0; turn < 16; turn++)
        valueOf(
          addTurn(
            average,
            Float64Array.from({ length: 100 }, () => 2 + 0.1 * random()),
          ),
        );
      const { mean, scatter: rms } = valueOf(readTurnAverage(average));
      for (let k = 0; k < 100; k++) squares += (mean[k]! - 2) ** 2 / (100 * runs);
      for (let k = 0; k < 100; k++) scatter += rms[k]! ** 2 / (100 * runs);
    }
    expect(Math.abs(Math.sqrt(squares) / 0.025 - 1)).toBeLessThan(0.05);
    expect(Math.abs(Math.sqrt(scatter) / 0.1 - 1)).toBeLessThan(0.05);
  });

  it('says when a turn is not wholly there', () => {
    const signal = { values: sampled(100, 1000, wave), startS: 0, rateHz: 1000 };
    expect(issueOf(resampleTurn(signal, [0.05, 0.15], 10))).toBe('outside');
    expect(issueOf(resampleTurn(signal, [-0.01, 0.05], 10))).toBe('outside');
    expect(issueOf(resampleTurn({ ...signal, values: [] }, [0, 0.05], 10))).toBe('outside');
    expect(
      issueOf(resampleTurn({ ...signal, values: new Array<number>(100).fill(NaN) }, [0, 0.05], 10)),
    ).toBe('outside');
    expect(issueOf(resampleTurn(signal, [0.05], 10))).toBe('too-few');
    expect(issueOf(resampleTurn(signal, [0, 0.05], 10, [0.5, 0.5]))).toBe('bad-setting');
    expect(issueOf(createTurnAverage(0))).toBe('bad-setting');
    const average = valueOf(createTurnAverage(3));
    expect(issueOf(addTurn(average, [1, 2]))).toBe('bad-setting');
    expect(issueOf(addTurn(average, [1, 2, NaN]))).toBe('not-finite');
    expect(valueOf(addTurn(average, [1, 2, 3]))).toBe(1);
    expect(issueOf(readTurnAverage(average))).toBe('too-few');
  });
});

describe('phase within the tooth', () => {
  it('and the instant of a place are each other turned round', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: 0.001, max: 0.1, noNaN: true }), { minLength: 1, maxLength: 20 }),
        fc.double({ min: -1, max: 1, noNaN: true }),
        (steps, startS) => {
          let t = 0;
          const teeth = [0, ...steps.map((step) => (t += step))];
          const { from, to, psiRad } = valueOf(toothPhase(teeth, startS, 1000, 3000));
          for (let i = from; i < to; i++) {
            const place = psiRad[i - from]! / (2 * Math.PI);
            expect(Math.abs(instantAt(teeth, place) - (startS + i / 1000))).toBeLessThan(1e-9);
            if (i > from) expect(psiRad[i - from]!).toBeGreaterThan(psiRad[i - from - 1]!);
          }
        },
      ),
    );
  });
});
