/** Signed tokens: who they are for is pinned on the way in (RFC 8725), so that one kind never passes for another. */
import { createSecretKey } from 'node:crypto';
import type { KeyObject } from 'node:crypto';
import jwt from 'jsonwebtoken';
import type { Clock } from '@/server/clock';

const issuer = 'turnmark';
export const accessTokenLifeS = 15 * 60;
/** Clocks of one machine: none needed beyond rounding. */
const leewayS = 2;

export type AccessClaims = { personId: string; familyId: string; expiresAtMs: number };

type Pinned = { audience: string; typ: string };
const accessPin: Pinned = { audience: 'api', typ: 'at+jwt' };
const rigKeyPin: Pinned = { audience: 'ingest', typ: 'rigkey+jwt' };

const keys = new Map<string, KeyObject>();

/** Given a text, the library first tries to read it as a public key at each call, which costs more than all the rest. */
function keyOf(secret: string): KeyObject {
  const known = keys.get(secret);
  if (known !== undefined) return known;
  const made = createSecretKey(secret, 'utf8');
  keys.set(secret, made);
  return made;
}

function verified(token: string, secret: string, pin: Pinned, clock: Clock): jwt.Jwt | undefined {
  try {
    const decoded = jwt.verify(token, keyOf(secret), {
      algorithms: ['HS256'],
      audience: pin.audience,
      issuer,
      clockTimestamp: Math.floor(clock.nowMs() / 1000),
      clockTolerance: leewayS,
      complete: true,
    });
    return decoded.header.typ === pin.typ ? decoded : undefined;
  } catch (error) {
    if (error instanceof jwt.JsonWebTokenError || error instanceof SyntaxError) return undefined;
    throw error;
  }
}

export function signAccessToken(secret: string, personId: string, familyId: string, clock: Clock): string {
  const iat = Math.floor(clock.nowMs() / 1000);
  const payload = { sid: familyId, iat, exp: iat + accessTokenLifeS };
  return jwt.sign(payload, keyOf(secret), {
    header: { alg: 'HS256', typ: accessPin.typ },
    algorithm: 'HS256',
    audience: accessPin.audience,
    issuer,
    subject: personId,
  });
}

/** undefined: not ours, not for this, or expired. */
export function readAccessToken(token: string, secret: string, clock: Clock): AccessClaims | undefined {
  const payload = verified(token, secret, accessPin, clock)?.payload;
  if (typeof payload !== 'object') return undefined;
  const { sub, exp } = payload;
  const sid: unknown = payload.sid;
  if (typeof sub !== 'string' || typeof sid !== 'string' || typeof exp !== 'number') return undefined;
  return { personId: sub, familyId: sid, expiresAtMs: exp * 1000 };
}

export function signRigKey(secret: string, keyId: string, rigId: string, clock: Clock): string {
  return jwt.sign({ iat: Math.floor(clock.nowMs() / 1000) }, keyOf(secret), {
    header: { alg: 'HS256', typ: rigKeyPin.typ, kid: keyId },
    algorithm: 'HS256',
    audience: rigKeyPin.audience,
    issuer,
    subject: rigId,
  });
}

export function readRigKey(
  token: string,
  secret: string,
  clock: Clock,
): { keyId: string; rigId: string } | undefined {
  const decoded = verified(token, secret, rigKeyPin, clock);
  if (decoded === undefined || typeof decoded.payload !== 'object') return undefined;
  const { kid } = decoded.header;
  const { sub } = decoded.payload;
  return typeof kid === 'string' && typeof sub === 'string' ? { keyId: kid, rigId: sub } : undefined;
}

/** The token of `Authorization: Bearer …`; undefined where there is none (RFC 6750). */
export function bearerOf(header: string | undefined): string | undefined {
  return /^Bearer ([A-Za-z0-9._~+/=-]{1,4096})$/i.exec(header ?? '')?.[1];
}
