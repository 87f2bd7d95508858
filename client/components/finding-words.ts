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

/** `{ peakV: 1.7, turnsInARow: 312 }` becomes "peak 1.7 V, turns in a row 312". */
export function evidenceText(evidence: Finding['evidence']): string {
  return Object.entries(evidence)
    .map(([name, value]) => {
      const words = name
        .replace(/([a-z0-9])([A-Z])/g, '$1 $2')
        .replace(/([A-Z])([A-Z][a-z])/g, '$1 $2')
        .split(' ');
      const unit = words.length > 1 ? units[words.at(-1)!] : undefined;
      if (unit) words.pop();
      const shown = typeof value === 'number' ? shortNumber(value) : value;
      return `${words.join(' ').toLowerCase()} ${shown}${unit ? (unit === '°' ? unit : ` ${unit}`) : ''}`;
    })
    .join(', ');
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
