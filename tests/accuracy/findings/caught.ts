/** Faults that are clearly there: found in time, closed in time, and nothing beside them that is no consequence. */
import { hash32 } from '@/simulator/random';
import { caseCodes, type CaseCode } from '@/tests/accuracy/findings/cases';
import { runCase, type Verdict } from '@/tests/accuracy/findings/judge';
import { isWanted, type Row, type Section } from '@/tests/accuracy/section';

const casesPerRound = 40;
const leastCaught = 0.95;
const mostBeside = 0.05;

export const caughtSection: Section = {
  name: 'findings caught',
  *run(random, options) {
    for (const code of caseCodes) {
      if (!isWanted(options, this.name, code)) continue;
      const seed = random(code);
      const verdicts = Array.from({ length: casesPerRound * options.rounds }, (_, i) =>
        runCase(code, hash32(seed, i) >>> 1),
      );
      yield caughtRow(code, verdicts);
      const closing = verdicts.filter(({ gone }) => gone !== null);
      if (closing.length > 0) yield goneRow(code, closing);
      yield besideRow(code, verdicts);
    }
  },
};

function caughtRow(code: CaseCode, verdicts: readonly Verdict[]): Row {
  const caught = verdicts.filter(({ outcome }) => outcome === 'caught');
  const others = verdicts.filter(({ outcome }) => outcome !== 'caught');
  const share = caught.length / verdicts.length;
  return {
    what: `${code}: found in time`,
    conditions: [...new Set(verdicts.map(({ variant }) => variant))].sort().join('; '),
    goal: `${100 * leastCaught} % or more`,
    measured: `${caught.length} of ${verdicts.length}${reasons(others)}`,
    pass: share >= leastCaught,
  };
}

function goneRow(code: CaseCode, closing: readonly Verdict[]): Row {
  const stayed = closing.filter(({ gone }) => gone === false);
  return {
    what: `${code}: gone in time`,
    conditions: 'after its cause went',
    goal: `${100 * leastCaught} % or more`,
    measured: `${closing.length - stayed.length} of ${closing.length}${seedsOf(stayed)}`,
    pass: stayed.length <= (1 - leastCaught) * closing.length,
  };
}

function besideRow(code: CaseCode, verdicts: readonly Verdict[]): Row {
  const spoilt = verdicts.filter(({ others }) => others.length > 0);
  const counts = new Map<string, number>();
  for (const { others } of spoilt)
    for (const other of others) counts.set(other, (counts.get(other) ?? 0) + 1);
  const list = [...counts].map(([other, count]) => `${count} ${other}`).join(', ');
  return {
    what: `${code}: nothing beside it`,
    conditions: 'but consequences',
    goal: `${100 * mostBeside} % or less`,
    measured: `${spoilt.length} of ${verdicts.length}${list && `: ${list}`}${seedsOf(spoilt)}`,
    pass: spoilt.length <= mostBeside * verdicts.length,
  };
}

function reasons(others: readonly Verdict[]): string {
  const words = (['late', 'cannot tell', 'missed'] as const).flatMap((outcome) => {
    const count = others.filter((verdict) => verdict.outcome === outcome).length;
    return count > 0 ? [`${count} ${outcome}`] : [];
  });
  return words.length > 0 ? `; ${words.join(', ')}${seedsOf(others)}` : '';
}

/** A few of the seeds, for a look at them. */
function seedsOf(verdicts: readonly Verdict[]): string {
  if (verdicts.length === 0) return '';
  return ` (${verdicts
    .slice(0, 4)
    .map(({ seed }) => seed)
    .join(' ')}${verdicts.length > 4 ? ' …' : ''})`;
}
