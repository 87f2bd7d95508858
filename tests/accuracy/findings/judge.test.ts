import { describe, expect, it } from 'vitest';
import type { FindingCode } from '@/signal/model';
import type { Sight } from '@/tests/accuracy/findings/drive';
import { judge, makeCase } from '@/tests/accuracy/findings/judge';

const code = 'run-out';
const made = { ...makeCase(code, 1), beginS: 10, wholeS: 11, endS: 20, appearS: 3, goneS: 5 };

function sight(openedS: number, closedS: number, more: Partial<Sight> = {}): Sight {
  const last = {} as Sight['last'];
  return { code, channel: 'A', outcome: 'found', causedBy: null, openedS, closedS, last, ...more };
}
const verdictOn = (...sights: Sight[]) => judge(code, 1, made, sights);
const other = (name: FindingCode, openedS: number, more: Partial<Sight> = {}) =>
  sight(openedS, openedS + 1, { code: name, ...more });

describe('judging a case', () => {
  it('tells in time, late and never', () => {
    expect(verdictOn(sight(13.9, 22))).toMatchObject({ outcome: 'caught', gone: true, others: [] });
    expect(verdictOn(sight(10.5, 22))).toMatchObject({ outcome: 'caught' });
    expect(verdictOn(sight(14.2, 22))).toMatchObject({ outcome: 'late' });
    expect(verdictOn()).toMatchObject({ outcome: 'missed', gone: null });
    expect(verdictOn(sight(24, 25))).toMatchObject({ outcome: 'missed' });
  });

  it('does not count what was said before there was anything', () => {
    expect(verdictOn(sight(5, 22))).toMatchObject({ outcome: 'missed', others: [code] });
  });

  it('keeps apart that it cannot be told', () => {
    expect(verdictOn(sight(12, 22, { outcome: 'cannot-tell' }))).toMatchObject({ outcome: 'cannot tell' });
  });

  it('wants every finding of the code closed after the fault', () => {
    expect(verdictOn(sight(12, 19), sight(19.5, Infinity))).toMatchObject({ outcome: 'caught', gone: false });
    expect(verdictOn(sight(12, 25.1))).toMatchObject({ gone: false });
  });

  it('counts other findings unless they follow from it', () => {
    const allowed = made.consequences[0] as FindingCode;
    const found = sight(12, 22);
    expect(verdictOn(found, other(allowed, 12)).others).toEqual([]);
    expect(verdictOn(found, other('near-alias', 12)).others).toEqual(['near-alias']);
    expect(verdictOn(found, other('near-alias', 12, { causedBy: code })).others).toEqual([]);
    expect(verdictOn(found, other('near-alias', 12, { outcome: 'cannot-tell' })).others).toEqual([]);
    // Before the fault nothing is a consequence of it.
    expect(verdictOn(found, other(allowed, 8)).others).toEqual([allowed]);
  });
});
