import jwt from 'jsonwebtoken';
import { describe, expect, it } from 'vitest';
import { RigKeys } from './rig-keys';
import { signAccessToken } from './tokens';

const secret = 'a secret of the ingest door that is long enough';

function someKeys(good: { keyId: string; rigId: string }[] = []) {
  let nowMs = Date.UTC(2026, 0, 1);
  const used: [string, number][] = [];
  const clock = { nowMs: () => nowMs };
  const keys = new RigKeys({ secret, clock, good, onUsed: (keyId, atMs) => used.push([keyId, atMs]) });
  return { keys, clock, used, move: (byMs: number) => (nowMs += byMs) };
}

describe('rig keys', () => {
  it('are JWTs without an end, for ingest, with their id and rig', () => {
    const { keys } = someKeys();
    const { header, payload } = jwt.decode(keys.issue({ keyId: 'k1', rigId: 'r1' }), { complete: true })!;
    expect(header).toEqual({ alg: 'HS256', typ: 'rigkey+jwt', kid: 'k1' });
    expect(payload).toMatchObject({ aud: 'ingest', sub: 'r1' });
    expect(payload).not.toHaveProperty('exp');
  });

  it('are good for their rig until revoked, and after a restart only if known', () => {
    const { keys } = someKeys();
    const text = keys.issue({ keyId: 'k1', rigId: 'r1' });
    expect(keys.verify(text)).toEqual({ ok: true, keyId: 'k1', rigId: 'r1' });
    expect(someKeys([{ keyId: 'k1', rigId: 'r1' }]).keys.verify(text)).toMatchObject({ ok: true });
    expect(someKeys([{ keyId: 'k1', rigId: 'r2' }]).keys.verify(text)).toMatchObject({ slug: 'key-revoked' });
    expect(someKeys().keys.verify(text)).toMatchObject({ ok: false, slug: 'key-revoked', rigId: 'r1' });
    keys.revoke('k1');
    expect(keys.verify(text)).toMatchObject({ ok: false, slug: 'key-revoked' });
  });

  it('go with their rig', () => {
    const { keys } = someKeys();
    const mine = keys.issue({ keyId: 'k1', rigId: 'r1' });
    const theirs = keys.issue({ keyId: 'k2', rigId: 'r2' });
    expect(keys.revokeRig('r1')).toEqual(['k1']);
    expect(keys.verify(mine).ok).toBe(false);
    expect(keys.verify(theirs).ok).toBe(true);
  });

  it('are nothing else that was signed, nor anything that was not', () => {
    const { keys, clock } = someKeys([{ keyId: 'k1', rigId: 'r1' }]);
    const sign = (claims: object, options: jwt.SignOptions, by = secret) =>
      jwt.sign({ iss: 'turnmark', aud: 'ingest', sub: 'r1', ...claims }, by, options);
    const header = { alg: 'HS256', typ: 'rigkey+jwt', kid: 'k1' };
    expect(keys.verify(sign({}, { header })).ok).toBe(true);
    for (const token of [
      sign({ aud: 'api' }, { header }),
      sign({ iss: 'else' }, { header }),
      sign({}, { header: { ...header, typ: 'JWT' } }),
      sign({}, { header: { ...header, alg: 'HS512' }, algorithm: 'HS512' }),
      sign({}, { header: { ...header, alg: 'none' }, algorithm: 'none' }, ''),
      sign({}, { header }, 'another secret of the same length, or nearly so'),
      signAccessToken(secret, 'r1', 'k1', clock),
      'garbage',
      '',
    ]) {
      expect(keys.verify(token)).toEqual({ ok: false, slug: 'no-key' });
    }
    expect(keys.verify(undefined)).toEqual({ ok: false, slug: 'no-key' });
  });

  it('have their last use written once a minute at most', () => {
    const { keys, used, move } = someKeys();
    const text = keys.issue({ keyId: 'k1', rigId: 'r1' });
    for (let i = 0; i < 61; i++) {
      keys.verify(text);
      move(1_000);
    }
    expect(used.map(([, atMs]) => atMs - used[0]![1])).toEqual([0, 60_000]);
  });
});
