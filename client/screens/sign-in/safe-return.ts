/** Where one goes who has signed in and came from nowhere in particular. */
export const home = '/rigs';

/**
 * The place to go back to after a sign-in: a path of this page and nothing else. Whatever could lead to another
 * site, or in a circle, becomes the home page.
 */
export function safeReturn(wanted: unknown): string {
  if (typeof wanted !== 'string') return home;
  // Browsers read `//host`, `/\host` and paths with control characters in them as another site's address.
  if (!/^\/(?![/\\])[\x20-\x7e\u00a0-\uffff]*$/.test(wanted) || wanted.includes('\\')) return home;
  const base = 'http://page.invalid';
  const read = URL.canParse(wanted, base) ? new URL(wanted, base) : null;
  if (read === null || read.origin !== base || read.pathname.startsWith('//')) return home;
  if (/^\/(sign-in)?\/?$/.test(read.pathname)) return home;
  return `${read.pathname}${read.search}${read.hash}`;
}
