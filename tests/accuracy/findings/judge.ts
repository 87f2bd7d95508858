/** What became of a case: seen in time, late, not at all; gone in time; and what else was said. */
import type { FindingCode } from '@/signal/model';
import type { FaultCase } from '@/tests/accuracy/findings/case';
import { caseMakers, type CaseCode } from '@/tests/accuracy/findings/cases';
import { createDraw } from '@/tests/accuracy/findings/draw';
import { drive, type Sight } from '@/tests/accuracy/findings/drive';

export type Verdict = {
  seed: number;
  variant: string;
  outcome: 'caught' | 'late' | 'missed' | 'cannot tell';
  /** From the instant at which the fault was all there, s; NaN where it was not seen. */
  afterS: number;
  /** Null where the fault stays, or where nothing was seen that could go. */
  gone: boolean | null;
  /** Said before the fault or beside it, and no consequence. */
  others: FindingCode[];
};

export function makeCase(code: CaseCode, seed: number): FaultCase {
  return caseMakers[code](createDraw(seed));
}

export function runCase(code: CaseCode, seed: number): Verdict {
  const made = makeCase(code, seed);
  return judge(code, seed, made, drive(made, made.seconds));
}

export function judge(code: CaseCode, seed: number, made: FaultCase, sights: readonly Sight[]): Verdict {
  const { beginS, wholeS, endS, appearS, goneS, variant, mayDoubt = false } = made;
  const own = sights.filter(
    (sight) =>
      (sight.code === code || sight.code === made.orSaidAs) &&
      sight.closedS > beginS &&
      sight.openedS <= endS + 0.1,
  );
  // Seen before there was anything to see, it cannot count.
  const first = own.find(({ openedS }) => openedS > beginS);
  const afterS = first ? first.openedS - wholeS : NaN;
  const inTime = afterS <= appearS;
  const isSaid = first?.outcome === 'found' || mayDoubt;
  const outcome = !first ? 'missed' : !inTime ? 'late' : isSaid ? 'caught' : 'cannot tell';
  const gone = !first || endS === Infinity ? null : own.every(({ closedS }) => closedS <= endS + goneS);
  return { seed, variant, outcome, afterS, gone, others: othersOf(code, made, sights) };
}

function othersOf(code: CaseCode, made: FaultCase, sights: readonly Sight[]): FindingCode[] {
  const others = sights.filter((sight) => {
    if (sight.outcome !== 'found') return false;
    const before = sight.openedS <= made.beginS;
    if (before) return true;
    return sight.code !== code && sight.causedBy === null && !made.consequences.includes(sight.code);
  });
  return [...new Set(others.map((sight) => sight.code))];
}
