import { describe, expect, it, vi } from 'vitest';
import { pathOf } from '@/client/data/api';
import { ApiProblem } from '@/client/data/api-problem';
import { send } from '@/client/data/http';
import { user } from '@/server/contract';

const person = { id: 'p1', email: 'ada@lab.example', name: 'Ada', role: 'engineer' };
const problemOf = (response: Response) =>
  send(async () => response, { method: 'GET', path: '/me', answer: user }, 't').catch(
    (e: unknown) => e as ApiProblem,
  );

describe('send', () => {
  it('puts the token into the header and never into the address', async () => {
    const fetch = vi.fn(async (_url: string, _init: RequestInit) => Response.json(person));
    const query = { q: 'a&b', tag: undefined, limit: 3 };
    await send(fetch, { method: 'GET', path: '/me', query, answer: user }, 'secret');
    const [url, init] = fetch.mock.calls[0] ?? [];
    expect(url).toBe('/api/v1/me?q=a%26b&limit=3');
    expect(new Headers(init?.headers).get('Authorization')).toBe('Bearer secret');
  });

  it('sends JSON with every change, a bodyless one too', async () => {
    const fetch = vi.fn(async (_url: string, _init: RequestInit) => new Response(null, { status: 204 }));
    await send(fetch, { method: 'DELETE', path: '/session' }, 't');
    const init = fetch.mock.calls[0]?.[1];
    expect(new Headers(init?.headers).get('Content-Type')).toBe('application/json');
    expect(init?.body).toBe('{}');
  });

  it('makes a problem of a refusal, with its fields and the wait', async () => {
    const body = {
      type: 'urn:turnmark:problem:invalid',
      title: 'Not valid',
      status: 422,
      errors: [{ pointer: '/wheel/pulsesPerTurn', detail: 'too small' }],
    };
    const problem = await problemOf(Response.json(body, { status: 422, headers: { 'Retry-After': '7' } }));
    expect(problem).toMatchObject({ kind: 'refused', slug: 'invalid', status: 422, retryAfterS: 7 });
    expect((problem as ApiProblem).errors).toEqual(body.errors);
  });

  it('names a refusal without a problem by its status', async () => {
    const problem = await problemOf(new Response('<html>', { status: 502 }));
    expect(problem).toMatchObject({ kind: 'refused', slug: 'hub-failed', temporary: true });
  });

  it('says offline where no answer came', async () => {
    const failing = send(
      () => Promise.reject(new TypeError('no network')),
      { method: 'GET', path: '/me' },
      null,
    );
    await expect(failing).rejects.toMatchObject({ kind: 'offline', temporary: true });
  });

  it('does not pass on what the contract does not promise', async () => {
    const problem = await problemOf(Response.json({ ...person, role: 'owner' }));
    expect(problem).toMatchObject({ kind: 'broken' });
    expect((problem as ApiProblem).detail).toContain('role');
  });

  it('lets an aborted call fail as aborted', async () => {
    const signal = AbortSignal.abort();
    const failing = send(() => Promise.reject(signal.reason), { method: 'GET', path: '/me', signal }, null);
    await expect(failing).rejects.toMatchObject({ name: 'AbortError' });
  });
});

describe('pathOf', () => {
  it('encodes its parts', () => {
    expect(pathOf('rigs', 'a/b?c', 'keys')).toBe('/rigs/a%2Fb%3Fc/keys');
  });
});
