/** An address as typed, as `http://host:port`; null where it is none. */
export function hubAddress(typed: string): string | null {
  const text = typed.trim();
  const full = text.includes('://') ? text : `http://${text}`;
  if (text === '' || !URL.canParse(full)) return null;
  const url = new URL(full);
  if (url.protocol !== 'http:' && url.protocol !== 'https:') return null;
  // What stands before an @ would be a secret in an address.
  if (url.username !== '' || url.password !== '' || !/^[a-z0-9.:[\]-]+$/i.test(url.host)) return null;
  return url.origin;
}

/** An address that means "this very machine": no other board can reach the hub by it. */
export function isLocalOnly(origin: string): boolean {
  const { hostname } = new URL(origin);
  return (
    hostname === 'localhost' ||
    hostname.endsWith('.localhost') ||
    hostname === '[::1]' ||
    /^127\./.test(hostname)
  );
}

/** What stands in the field at first: an address that a board can reach, where one is known. */
export function firstAddress(pageOrigin: string, hubAddresses: readonly string[]): string {
  return isLocalOnly(pageOrigin) ? (hubAddresses[0] ?? pageOrigin) : pageOrigin;
}
