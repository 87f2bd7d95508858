import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { Access } from '@/client/data/access';
import { Api } from '@/client/data/api';
import { systemClock } from '@/client/data/clock';
import { user } from '@/server/contract';

const person = { id: 'p1', email: 'ada@lab.example', name: 'Ada', role: 'engineer' } as const;
const session = (accessToken: string) => ({ accessToken, expiresInS: 900, user: person });
const json = (body: unknown, status = 200) => Response.json(body, { status });
const refused = (status: number, slug: string) =>
  json({ type: `urn:turnmark:problem:${slug}`, title: slug, status }, status);

type Answer = (url: string, init: RequestInit) => Response | Promise<Response>;

function lab(answer: Answer) {
  const fetch = vi.fn(async (url: string, init: RequestInit) => answer(url, init));
  const access = new Access(fetch, systemClock);
  const calls = (part: string) => fetch.mock.calls.filter(([url]) => url.includes(part));
  return { access, api: new Api(fetch, access), calls };
}

const bearer = (init: RequestInit) => new Headers(init.headers).get('Authorization');

beforeEach(() => {
  vi.useFakeTimers();
});
afterEach(() => {
  vi.useRealTimers();
});

describe('one refresh for all', () => {
  it('serves ten calls that were refused at once', async () => {
    const { access, api, calls } = lab((url, init) => {
      if (url.endsWith('/session/refresh')) return json(session('new'));
      return bearer(init) === 'Bearer new' ? json(person) : refused(401, 'not-signed-in');
    });
    access.take(session('old'));
    const all = await Promise.all(Array.from({ length: 10 }, () => api.get('/me', user)));
    expect(all).toEqual(Array(10).fill(person));
    expect(calls('/session/refresh')).toHaveLength(1);
  });

  it('is not asked for when another call has brought a fresh token meanwhile', async () => {
    const { access, api, calls } = lab((url, init) => {
      if (url.endsWith('/session/refresh')) return json(session('never'));
      if (bearer(init) === 'Bearer new') return json(person);
      access.take(session('new'));
      return refused(401, 'not-signed-in');
    });
    access.take(session('old'));
    await expect(api.get('/me', user)).resolves.toEqual(person);
    expect(calls('/session/refresh')).toHaveLength(0);
  });

  it('gives up after the second refusal', async () => {
    const { access, api, calls } = lab((url) =>
      url.endsWith('/session/refresh') ? json(session('new')) : refused(401, 'not-signed-in'),
    );
    access.take(session('old'));
    await expect(api.get('/me', user)).rejects.toMatchObject({ slug: 'not-signed-in' });
    expect(calls('/me')).toHaveLength(2);
  });

  it('comes unasked before the token ends', async () => {
    const { access, calls } = lab(() => json(session('new')));
    access.take(session('old'));
    await vi.advanceTimersByTimeAsync(719_000);
    expect(calls('/session/refresh')).toHaveLength(0);
    await vi.advanceTimersByTimeAsync(2_000);
    expect(calls('/session/refresh')).toHaveLength(1);
    expect(access.token).toBe('new');
  });

  it('whose answer comes after a sign-out signs nobody in again', async () => {
    let answerNow: (response: Response) => void = () => undefined;
    const { access } = lab(() => new Promise((resolve) => (answerNow = resolve)));
    access.take(session('old'));
    const renewed = vi.fn();
    const ended = vi.fn();
    access.listen({ renewed, ended });
    const late = access.refresh();
    access.drop();
    answerNow(json(session('new')));
    await expect(late).rejects.toMatchObject({ slug: 'not-signed-in' });
    expect(access.token).toBeNull();
    expect(renewed).not.toHaveBeenCalled();
    expect(ended).not.toHaveBeenCalled();
  });

  it('that is refused ends the session; one without an answer does not', async () => {
    let reachable = false;
    const { access } = lab(() => {
      if (!reachable) throw new TypeError('no network');
      return refused(401, 'not-signed-in');
    });
    access.take(session('old'));
    const ended = vi.fn();
    access.listen({ renewed: () => undefined, ended });
    await expect(access.refresh()).rejects.toMatchObject({ kind: 'offline' });
    expect(ended).not.toHaveBeenCalled();
    expect(access.token).toBe('old');
    reachable = true;
    await expect(access.refresh()).rejects.toMatchObject({ slug: 'not-signed-in' });
    expect(ended).toHaveBeenCalledTimes(1);
    expect(access.token).toBeNull();
  });
});
