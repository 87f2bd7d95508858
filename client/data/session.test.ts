import { describe, expect, it, vi } from 'vitest';
import { Access } from '@/client/data/access';
import { Api } from '@/client/data/api';
import type { Clock } from '@/client/data/clock';
import { SessionStore } from '@/client/data/session';

const person = { id: 'p1', email: 'ada@lab.example', name: 'Ada', role: 'engineer' };
const stillClock: Clock = { nowMs: () => 0, setTimeout: () => null, clearTimeout: () => undefined };
const session = () => Response.json({ accessToken: 't', expiresInS: 900, user: person });
const refused = (status: number) =>
  Response.json({ type: 'urn:turnmark:problem:x', title: 'no', status }, { status });

function lab(answers: Record<string, () => Response>) {
  const fetch = vi.fn(async (url: string, init: RequestInit) => {
    const answer = answers[`${init.method} ${url.replace('/api/v1', '')}`];
    if (!answer) throw new TypeError('no network');
    return answer();
  });
  const access = new Access(fetch, stillClock);
  return { access, store: new SessionStore({ fetch, access, api: new Api(fetch, access) }) };
}

describe('the session', () => {
  it('is restored from the cookie', async () => {
    const { store } = lab({ 'POST /session/refresh': session });
    expect(store.getSnapshot().status).toBe('restoring');
    await store.restore();
    expect(store.getSnapshot()).toEqual({ status: 'signed-in', user: person });
  });

  it('is signed out without a cookie, and says nothing of an end', async () => {
    const { store } = lab({ 'POST /session/refresh': () => refused(401) });
    await store.restore();
    expect(store.getSnapshot()).toEqual({ status: 'signed-out', why: 'none' });
  });

  it('is neither while the hub does not answer, and can be tried again', async () => {
    const answers: Record<string, () => Response> = {};
    const { store } = lab(answers);
    await store.restore();
    expect(store.getSnapshot().status).toBe('unreachable');
    answers['POST /session/refresh'] = session;
    await store.restore();
    expect(store.getSnapshot().status).toBe('signed-in');
  });

  it('stays signed out after a wrong password', async () => {
    const { store } = lab({
      'POST /session/refresh': () => refused(401),
      'POST /session': () => refused(401),
    });
    await store.restore();
    await expect(store.signIn('ada@lab.example', 'wrong')).rejects.toMatchObject({ status: 401 });
    expect(store.getSnapshot().status).toBe('signed-out');
  });

  it('ends when asked, and stands when the hub could not be told', async () => {
    const answers: Record<string, () => Response> = { 'POST /session': session };
    const { store, access } = lab(answers);
    await store.signIn('ada@lab.example', 'right');
    await expect(store.signOut()).rejects.toMatchObject({ kind: 'offline' });
    expect(store.getSnapshot().status).toBe('signed-in');
    answers['DELETE /session'] = () => new Response(null, { status: 204 });
    await store.signOut();
    expect(store.getSnapshot()).toEqual({ status: 'signed-out', why: 'asked' });
    expect(access.token).toBeNull();
  });

  it('says that it was ended from elsewhere', async () => {
    const { store, access } = lab({ 'POST /session': session, 'POST /session/refresh': () => refused(401) });
    await store.signIn('ada@lab.example', 'right');
    await access.refresh().catch(() => undefined);
    expect(store.getSnapshot()).toEqual({ status: 'signed-out', why: 'ended' });
  });

  it('does not disturb the screens when a token is renewed', async () => {
    const { store, access } = lab({ 'POST /session/refresh': session });
    await store.restore();
    const heard = vi.fn();
    store.subscribe(heard);
    await access.refresh();
    expect(heard).not.toHaveBeenCalled();
  });
});
