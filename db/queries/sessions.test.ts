import * as fc from 'fast-check';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Databases } from '../open';
import { inMemory } from '../test-support/rig';
import { createPerson, deletePerson, updatePerson } from './people';
import {
  createFamily,
  endAllOfPerson,
  endFamily,
  familyIsActive,
  familyOfToken,
  graceMs,
  pruneSessions,
  rotate,
} from './sessions';

let databases: Databases;
let personId: string;
const secret = 'a secret of the test';
const ttlMs = 10_000_000;

beforeEach(async () => {
  databases = inMemory();
  personId = await person('ada@lab.example');
});
afterEach(() => databases.close());

async function person(email: string): Promise<string> {
  const made = await createPerson(databases.db, {
    email,
    name: 'Ada',
    role: 'engineer',
    passwordHash: 'h',
    nowMs: 0,
  });
  if (!made.ok) throw new Error(made.issue.code);
  return made.value.id;
}

const signIn = (nowMs = 0) => createFamily(databases.db, { personId, secret, nowMs, ttlMs });
const turn = (token: string, nowMs: number) => rotate(databases.db, { token, secret, nowMs });

async function turned(token: string, nowMs: number): Promise<string> {
  const rotation = await turn(token, nowMs);
  if (rotation.result !== 'ok') throw new Error(rotation.result);
  return rotation.token;
}

describe('rotate', () => {
  it('gives a successor that can be rotated in its turn', async () => {
    const { token, familyId, expiresAtMs } = await signIn();
    expect(expiresAtMs).toBe(ttlMs);
    const first = await turn(token, 1000);
    expect(first).toMatchObject({ result: 'ok', familyId, personId, expiresAtMs });
    const second = await turned(first.result === 'ok' ? first.token : '', 2000);
    expect(new Set([token, first.result === 'ok' && first.token, second]).size).toBe(3);
  });

  it('gives two tabs the same successor for 20 s, then takes the old token for stolen', async () => {
    const { token, familyId } = await signIn();
    const successor = await turned(token, 1000);
    expect(await turned(token, 1000 + graceMs)).toBe(successor);
    expect(await turn(token, 1001 + graceMs)).toEqual({ result: 'reuse', familyId, personId });
    expect(await turn(successor, 1002 + graceMs)).toMatchObject({ result: 'ended' });
    expect(await familyIsActive(databases.db, familyId, 2000)).toBe(false);
  });

  it('ends the family on any token older than the one before, at once', async () => {
    const { token } = await signIn();
    const second = await turned(token, 1000);
    const third = await turned(second, 1001);
    expect(await turn(token, 1002)).toMatchObject({ result: 'reuse' });
    expect(await turn(third, 1003)).toMatchObject({ result: 'ended' });
  });

  it('knows no token that it did not give, and none under another secret', async () => {
    const { token } = await signIn();
    expect(await turn('nonsense', 1)).toEqual({ result: 'unknown' });
    expect(await turn(token.toLowerCase() === token ? token.toUpperCase() : token.toLowerCase(), 1)).toEqual({
      result: 'unknown',
    });
    const successor = await rotate(databases.db, { token, secret: 'another', nowMs: 1 });
    expect(successor.result === 'ok' && (await turned(successor.token, 2)) !== '').toBe(true);
  });

  it('ends with the family, however fresh the token', async () => {
    const { token, expiresAtMs } = await signIn();
    const successor = await turned(token, expiresAtMs - 1);
    expect(await turn(successor, expiresAtMs)).toMatchObject({ result: 'expired' });
  });

  it('run twice at once, both get the same successor', async () => {
    const { token } = await signIn();
    const both = await Promise.all([turned(token, 5), turned(token, 5), turned(token, 5)]);
    expect(new Set(both).size).toBe(1);
  });

  it('follows its rule through any sequence of uses', async () => {
    // Which of the tokens seen so far comes back, and how long after the use before.
    const uses = fc.array(
      fc.record({ back: fc.nat(3), afterMs: fc.constantFrom(0, 1, 9_999, 20_000, 20_001) }),
      { maxLength: 12 },
    );
    await fc.assert(
      fc.asyncProperty(uses, async (sequence) => {
        const tokens = [(await signIn()).token];
        let nowMs = 0;
        let replacedAtMs = 0;
        let ended = false;
        for (const { back, afterMs } of sequence) {
          nowMs += afterMs;
          const which = Math.max(0, tokens.length - 1 - back);
          const age = tokens.length - 1 - which;
          const rotation = await turn(tokens[which]!, nowMs);
          if (ended) {
            expect(rotation.result).toBe('ended');
          } else if (age === 0) {
            if (rotation.result !== 'ok') throw new Error(rotation.result);
            expect(tokens).not.toContain(rotation.token);
            tokens.push(rotation.token);
            replacedAtMs = nowMs;
          } else if (age === 1 && nowMs - replacedAtMs <= 20_000) {
            expect(rotation).toMatchObject({ result: 'ok', token: tokens.at(-1) });
          } else {
            expect(rotation.result).toBe('reuse');
            ended = true;
          }
        }
      }),
      { numRuns: 60 },
    );
  });

  it('stores no token, only hashes', async () => {
    const { token } = await signIn();
    const successor = await turned(token, 1);
    const stored = JSON.stringify(await databases.db.selectFrom('refresh_token').selectAll().execute());
    expect(stored).not.toContain(token);
    expect(stored).not.toContain(successor);
  });
});

describe('ending', () => {
  it('one family leaves the others', async () => {
    const phone = await signIn();
    const laptop = await signIn();
    expect(await familyOfToken(databases.db, phone.token)).toEqual({ familyId: phone.familyId, personId });
    await endFamily(databases.db, phone.familyId, 5);
    expect(await turn(phone.token, 6)).toMatchObject({ result: 'ended' });
    expect(await turn(laptop.token, 6)).toMatchObject({ result: 'ok' });
  });

  it('everywhere ends all of one person, and nobody else', async () => {
    const mine = [await signIn(), await signIn()];
    const other = await createFamily(databases.db, {
      personId: await person('b@lab.example'),
      secret,
      nowMs: 0,
      ttlMs,
    });
    expect((await endAllOfPerson(databases.db, personId, 5)).sort()).toEqual(
      mine.map((f) => f.familyId).sort(),
    );
    expect(await endAllOfPerson(databases.db, personId, 6)).toEqual([]);
    expect(await turn(other.token, 6)).toMatchObject({ result: 'ok' });
  });

  it.each([{ role: 'reviewer' }, { passwordHash: 'new' }, { disabled: true }] as const)(
    'comes with %o',
    async (patch) => {
      const { token, familyId } = await signIn();
      await updatePerson(databases.db, personId, { ...patch, nowMs: 5 });
      expect(await turn(token, 6)).toMatchObject({ result: 'ended' });
      expect(await familyIsActive(databases.db, familyId, 6)).toBe(false);
    },
  );

  it('does not come with a new name', async () => {
    const { token } = await signIn();
    await updatePerson(databases.db, personId, { name: 'Ada L.', role: 'engineer', nowMs: 5 });
    expect(await turn(token, 6)).toMatchObject({ result: 'ok' });
  });

  it('a deleted person leaves no session', async () => {
    const { token } = await signIn();
    await deletePerson(databases.db, personId);
    expect(await turn(token, 6)).toEqual({ result: 'unknown' });
  });
});

describe('pruneSessions', () => {
  it('forgets what has expired, and only that', async () => {
    const old = await signIn(0);
    const fresh = await signIn(1);
    expect(await pruneSessions(databases.db, ttlMs)).toBe(1);
    expect(await turn(old.token, ttlMs)).toEqual({ result: 'unknown' });
    expect(await turn(fresh.token, ttlMs)).toMatchObject({ result: 'ok' });
  });
});
