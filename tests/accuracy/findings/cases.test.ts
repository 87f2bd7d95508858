import { describe, expect, it } from 'vitest';
import { createPipeline } from '@/signal/pipeline';
import { createRig } from '@/simulator/rig-model';
import { caseCodes } from '@/tests/accuracy/findings/cases';
import { makeClean } from '@/tests/accuracy/findings/clean';
import { drive } from '@/tests/accuracy/findings/drive';
import { makeCase } from '@/tests/accuracy/findings/judge';
import type { Bench } from '@/tests/accuracy/findings/machine';

const seeds = Array.from({ length: 40 }, (_, i) => 1000 + 7919 * i);

function issueOf({ spec, setup, settings, rigSeed }: Bench): string | null {
  const { channels } = createRig(spec, rigSeed);
  const built = createPipeline({ rig: setup, settings, rateHz: spec.rateHz, channels, startIndex: 0 });
  return built.ok ? null : built.issue.detail;
}

describe('cases of findings', () => {
  it.each(caseCodes)('%s: every seed makes a rig that can be run, with its fault inside the run', (code) => {
    for (const seed of seeds) {
      const made = makeCase(code, seed);
      expect({ seed, issue: issueOf(made) }).toEqual({ seed, issue: null });
      expect(made.wholeS).toBeGreaterThanOrEqual(made.beginS);
      expect(made.seconds).toBeGreaterThan(made.wholeS + made.appearS);
      if (made.endS < Infinity) expect(made.seconds).toBeGreaterThan(made.endS + made.goneS);
      // A run of minutes would make the table slow.
      expect(made.seconds).toBeLessThan(180);
    }
  });

  it('follow from their seed alone', () => {
    for (const code of caseCodes) expect(makeCase(code, 77)).toEqual(makeCase(code, 77));
    expect(makeClean(5)).toEqual(makeClean(5));
    expect(makeClean(5)).not.toEqual(makeClean(6));
  });

  it('sound rigs can be run', () => {
    for (const seed of seeds)
      expect({ seed, issue: issueOf(makeClean(seed)) }).toEqual({ seed, issue: null });
  });

  it.each(caseCodes)(
    '%s: whatever is said begins no later than the place to look at, and ends no sooner',
    (code) => {
      for (const seed of [700_100, 700_101]) {
        const made = makeCase(code, seed);
        for (const { last, openedS } of drive(made, made.seconds)) {
          const { from, at, to } = last;
          const inOrder = from <= at && at <= (to ?? openedS + 1e-9);
          expect({ seed, said: last.code, from, at, to, inOrder }).toMatchObject({ inOrder: true });
        }
      }
    },
  );

  it('shows when a finding opens and closes', () => {
    const made = makeCase('lost-samples', 3);
    const [lost] = drive(made, made.seconds).filter((sight) => sight.code === 'lost-samples');
    expect(lost!.openedS).toBeGreaterThan(made.beginS);
    expect(lost!.openedS).toBeLessThan(made.endS + 0.2);
    expect(lost!.closedS).toBeLessThan(made.seconds);
  });
});
