import { countText } from '@/client/drawings/count-text';
import type { Finding } from '@/signal/model';
import type { ColourName } from '@/client/theme/tokens';

export const severityWord = { note: 'Note', warn: 'Moderate', fault: 'Grave' } as const;
export const severityTone = { note: 'scribeSoft', warn: 'warn', fault: 'fault' } as const satisfies Record<
  string,
  ColourName
>;
const rank = { fault: 0, warn: 1, note: 2 } as const;

// The unit is the last part of an evidence's name: `peakV` is 1.7 V.
const units: Record<string, string> = {
  V: 'V',
  Mv: 'mV',
  S: 's',
  Ms: 'ms',
  Us: 'µs',
  Hz: 'Hz',
  Rpm: 'rpm',
  Deg: '°',
  Percent: '%',
  Mt: 'mT',
  K: 'K',
  Ppm: 'ppm',
};
/** Units of more than one word. */
const longUnits: Record<string, string> = { RadPerS2: 'rad/s²', VoltsPerSecond: 'V/s' };

/** `{ peakV: 1.7, turnsInARow: 312 }` becomes "peak 1.7 V, turns in a row 312". */
export function evidenceText(evidence: Finding['evidence']): string {
  return Object.entries(evidence)
    .map(([name, value]) => {
      const { words, unit, after } = partsOf(name);
      const shown = typeof value === 'number' ? withUnit(value, unit) : value;
      return [...words, shown, ...after].join(' ');
    })
    .join(', ');
}

/** `jumpPercentOfTooth` is so many percent of a tooth: what follows the unit stands behind the number. */
function partsOf(name: string): { words: string[]; unit: string | undefined; after: string[] } {
  const long = Object.keys(longUnits).find((end) => name.endsWith(end));
  const words = (long ? name.slice(0, -long.length) : name)
    .replace(/([a-z0-9])([A-Z])/g, '$1 $2')
    .replace(/([A-Z])([A-Z][a-z])/g, '$1 $2')
    .split(' ');
  const lower = (list: string[]) => list.map((word) => word.toLowerCase());
  if (long) return { words: lower(words), unit: longUnits[long], after: [] };
  const of = words.indexOf('Of');
  const at = (of > 1 ? of : words.length) - 1;
  const unit = at > 0 ? units[words[at]!] : undefined;
  if (!unit) return { words: lower(words), unit: undefined, after: [] };
  return { words: lower(words.slice(0, at)), unit, after: lower(words.slice(at + 1)) };
}

/** Three figures are enough to act on; short times in the unit that suits them. */
function withUnit(value: number, unit: string | undefined): string {
  const size = Math.abs(value);
  if (unit === 's' && size > 0 && size < 1)
    return size < 1e-3 ? withUnit(1e6 * value, 'µs') : withUnit(1e3 * value, 'ms');
  const shown = shortNumber(size < 1000 ? Number(value.toPrecision(3)) : value);
  return unit ? `${shown}${unit === '°' ? '' : ' '}${unit}` : shown;
}

/** At most four significant figures, a true minus, no exponent for what people meet on a bench. */
export function shortNumber(value: number): string {
  if (!Number.isFinite(value)) return 'unknown';
  const magnitude = Math.abs(value);
  const digits =
    magnitude >= 1000 || Number.isInteger(value)
      ? 0
      : Math.max(0, 3 - Math.floor(Math.log10(magnitude || 1)));
  const text = magnitude
    .toFixed(Math.min(digits, 9))
    .replace(/(\.\d*?)0+$/, '$1')
    .replace(/\.$/, '');
  return `${value < 0 && Number(text) !== 0 ? '\u2212' : ''}${text}`;
}

/** Worst first; within a severity the newest first. */
export function worstFirst(findings: readonly Finding[]): Finding[] {
  return [...findings].sort((a, b) => rank[a.severity] - rank[b.severity] || b.from - a.from);
}

/** Consequences of one kind as one: the first of them, and how many there are. */
export function foldAlike(findings: readonly Finding[]): { finding: Finding; times: number }[] {
  const alike = new Map<string, { finding: Finding; times: number }>();
  for (const finding of findings) {
    const { code, channel, message } = finding;
    const key = `${code} ${channel} ${message.replace(/[\d.]+/g, '#')}`;
    const known = alike.get(key);
    if (known) known.times += 1;
    else alike.set(key, { finding, times: 1 });
  }
  return [...alike.values()];
}

export type FoldedFinding = { finding: Finding; follows: Finding[] };

/** Consequences fold under their cause where the cause is there too; worst causes first. */
export function foldFindings(findings: readonly Finding[]): FoldedFinding[] {
  const codes = new Set(findings.map((f) => f.code));
  const roots = findings.filter(
    (f) => f.causedBy === null || f.causedBy === f.code || !codes.has(f.causedBy),
  );
  const left = new Set(findings.filter((f) => !roots.includes(f)));
  const folded = worstFirst(roots).map((finding) => {
    const follows: Finding[] = [];
    const reached = new Set<string>([finding.code]);
    for (let grew = true; grew;) {
      grew = false;
      for (const f of left) {
        if (f.causedBy === null || !reached.has(f.causedBy)) continue;
        follows.push(f);
        reached.add(f.code);
        left.delete(f);
        grew = true;
      }
    }
    return { finding, follows };
  });
  // A ring of causes has no root: shown as it is, since nothing may vanish.
  return [...folded, ...[...left].map((finding) => ({ finding, follows: [] }))];
}

/** Health in one word and one count: the worst, never a tick beside a fault. */
export function healthOf(findings: readonly Finding[]): {
  status: 'good' | 'note' | 'warn' | 'fault';
  word: string;
} {
  const worst = worstFirst(findings)[0];
  if (!worst) return { status: 'good', word: 'no findings' };
  return {
    status: worst.severity,
    word: countText(findings.length, 'finding'),
  };
}
