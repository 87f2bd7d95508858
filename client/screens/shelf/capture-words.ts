import type { Capture } from '@/server/contract';
import type { FindingCode } from '@/signal/model';
import type { Status } from '@/client/components/status-word';

/** "missing-tooth" as people read it. */
export function findingWords(code: FindingCode): string {
  return code.replaceAll('-', ' ');
}

const rank = { fault: 0, warn: 1, note: 2 } as const;

/** The worst finding of a capture and how many more there are: "missing tooth, 2 more". */
export function captureHealth(findings: Capture['findings']): { status: Status; word: string } {
  const [worst] = [...findings].sort((a, b) => rank[a.severity] - rank[b.severity] || b.count - a.count);
  if (!worst) return { status: 'good', word: 'no findings' };
  const total = findings.reduce((sum, f) => sum + f.count, 0);
  const more = total - 1;
  return { status: worst.severity, word: `${findingWords(worst.code)}${more > 0 ? `, ${more} more` : ''}` };
}

/** "0.8 s", "12.4 s", "3 min 20 s". */
export function lengthWords(seconds: number): string {
  if (seconds < 100) return `${seconds.toFixed(1)} s`;
  const whole = Math.round(seconds);
  const rest = whole % 60;
  return `${Math.floor(whole / 60)} min${rest > 0 ? ` ${rest} s` : ''}`;
}

export function titleOf(capture: Pick<Capture, 'title'>): string {
  return capture.title || 'Untitled capture';
}

/** Tags of the captures in sight, most used first. */
export function tagsOf(captures: readonly Pick<Capture, 'tags'>[]): string[] {
  const uses = new Map<string, number>();
  for (const { tags } of captures) for (const tag of tags) uses.set(tag, (uses.get(tag) ?? 0) + 1);
  return [...uses].sort(([a, n], [b, m]) => m - n || a.localeCompare(b)).map(([tag]) => tag);
}
