import { createHash, createHmac } from 'node:crypto';

/**
 * The refresh token number `counter` of a family: HMAC-SHA256 under the hub's secret, 43 characters. It is derived,
 * not random, so that two tabs that rotate the same token within the grace get the same successor although the hub
 * stores hashes only. Without the secret, no token tells of another (HMAC is a pseudo-random function: RFC 2104).
 */
export function deriveRefreshToken(secret: string | Uint8Array, familyId: string, counter: number): string {
  return createHmac('sha256', secret).update(`turnmark refresh ${familyId} ${counter}`).digest('base64url');
}

/** What is stored of a token. It has 256 bits, so that a plain hash is enough. */
export function hashRefreshToken(token: string): string {
  return createHash('sha256').update(token).digest('base64url');
}
