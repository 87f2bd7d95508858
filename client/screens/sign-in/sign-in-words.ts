import type { ApiProblem } from '@/client/data/api-problem';

/** Why a sign-in failed and what to do next, in words. */
export function signInWords(problem: ApiProblem): string {
  if (problem.kind === 'offline') return `${problem.title}. ${problem.detail}`;
  if (problem.status === 401) return 'That email and password do not go together. Check both and try again.';
  if (problem.slug === 'too-many-requests') return `Too many tries. ${waitWords(problem.retryAfterS)}`;
  if (problem.slug === 'foreign-origin') {
    return 'The hub does not know this address as its own. Open the page at the address that the hub printed when it started.';
  }
  return [problem.title, problem.detail].filter(Boolean).join('. ');
}

function waitWords(retryAfterS: number | null): string {
  if (retryAfterS === null) return 'Wait a while, then try again.';
  if (retryAfterS <= 90) return `Try again in ${Math.ceil(retryAfterS)} s.`;
  return `Try again in ${Math.ceil(retryAfterS / 60)} min.`;
}

/** True on a page that anyone on the way can read. */
export function isUnencrypted(location: { protocol: string }): boolean {
  return location.protocol === 'http:';
}
