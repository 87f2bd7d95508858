import { afterEach, describe, expect, it } from 'vitest';
import type { Problem, Session } from '@/server/contract';
import { movableClock, password, startHub } from './api-harness';
import type { TestHub } from './api-harness';

let hub: TestHub;
afterEach(() => hub.close());

const engineer = { email: 'engineer@turnmark.example', password };
const cookieOf = (headers: Headers) => (headers.get('set-cookie') ?? '').split(';')[0] ?? '';
const slug = (body: unknown) => (body as Problem).type.replace('urn:turnmark:problem:', '');

function refresh(cookie: string, origin: string | undefined = hub.url) {
  return hub.anyone<Session>(
    'POST',
    '/api/v1/session/refresh',
    {},
    {
      Cookie: cookie,
      ...(origin === undefined ? {} : { Origin: origin }),
    },
  );
}

describe('signing in', () => {
  it('gives an access token, the person, and a cookie that no script sees', async () => {
    hub = await startHub();
    const { status, body, headers } = await hub.anyone<Session>('POST', '/api/v1/session', engineer);
    expect(status).toBe(200);
    expect(body).toMatchObject({ expiresInS: 900, user: { email: engineer.email, role: 'engineer' } });
    expect(headers.get('set-cookie')).toMatch(
      /^turnmark=[^;]+; .*Path=\/api\/v1\/session;.*HttpOnly; SameSite=Strict/,
    );
    expect(headers.get('set-cookie')).not.toContain('Secure');
    expect(headers.get('cache-control')).toBe('no-store');
    const me = await hub.asking(body.accessToken)('GET', '/api/v1/me');
    expect(me.body).toEqual(body.user);
  });

  it('takes the address in any case and with spaces around it', async () => {
    hub = await startHub();
    const { status } = await hub.anyone('POST', '/api/v1/session', {
      ...engineer,
      email: ' Engineer@Turnmark.Example ',
    });
    expect(status).toBe(200);
  });

  it('binds the cookie to https where the public URL is https', async () => {
    hub = await startHub({}, { publicUrl: new URL('https://marks.example') });
    const { headers } = await hub.anyone('POST', '/api/v1/session', engineer);
    expect(headers.get('set-cookie')).toMatch(
      /^__Host-turnmark=[^;]+;.*Path=\/;.*HttpOnly; Secure; SameSite=Strict/,
    );
    expect(headers.get('strict-transport-security')).toContain('max-age=31536000');
  });

  it('answers a wrong password and an unknown person alike', async () => {
    hub = await startHub();
    const wrong = await hub.anyone('POST', '/api/v1/session', { ...engineer, password: 'no' });
    const unknown = await hub.anyone('POST', '/api/v1/session', {
      email: 'nobody@turnmark.example',
      password,
    });
    expect(wrong.status).toBe(401);
    expect(wrong.body).toEqual(unknown.body);
    expect(wrong.headers.get('set-cookie')).toBeNull();
  });

  it('demands JSON and refuses another page', async () => {
    hub = await startHub();
    const form = await hub.anyone('POST', '/api/v1/session', 'email=a', { 'Content-Type': 'text/plain' });
    expect([form.status, slug(form.body)]).toEqual([415, 'content-type']);
    const foreign = await hub.anyone('POST', '/api/v1/session', engineer, {
      Origin: 'https://elsewhere.example',
    });
    expect([foreign.status, slug(foreign.body)]).toEqual([403, 'foreign-origin']);
    const nullOrigin = await hub.anyone('POST', '/api/v1/session', engineer, { Origin: 'null' });
    expect(nullOrigin.status).toBe(403);
    const own = await hub.anyone('POST', '/api/v1/session', engineer, { Origin: hub.url });
    expect(own.status).toBe(200);
  });

  it('names the fields that are wrong, and says so where the body is no JSON', async () => {
    hub = await startHub();
    const missing = await hub.anyone<Problem>('POST', '/api/v1/session', { email: engineer.email });
    expect(missing.status).toBe(422);
    expect(missing.headers.get('content-type')).toContain('application/problem+json');
    expect(missing.body.errors?.map((e) => e.pointer)).toEqual(['/password']);
    const broken = await hub.anyone('POST', '/api/v1/session', '{"email":');
    expect([broken.status, slug(broken.body)]).toEqual([400, 'unreadable']);
    const huge = await hub.anyone('POST', '/api/v1/session', { email: 'x'.repeat(300_000) });
    expect([huge.status, slug(huge.body)]).toEqual([413, 'too-large']);
  });

  it('stops guesses at one account, and at many from one address', async () => {
    hub = await startHub({ attemptLimits: { windowMs: 60_000, perAddress: 5, perAccount: 2 } });
    const guess = (email: string) => hub.anyone('POST', '/api/v1/session', { email, password: 'guess' });
    expect((await guess(engineer.email)).status).toBe(401);
    expect((await guess(engineer.email.toUpperCase())).status).toBe(401);
    const stopped = await guess(engineer.email);
    expect([stopped.status, slug(stopped.body)]).toEqual([429, 'too-many-requests']);
    expect(Number(stopped.headers.get('retry-after'))).toBeGreaterThan(0);
    expect((await hub.anyone('POST', '/api/v1/session', engineer)).status).toBe(429);
    await guess('a@x.example');
    expect((await guess('b@x.example')).status).toBe(429);
  });
});

describe('staying signed in', () => {
  it('rotates, and gives two tabs the same successor within 20 s', async () => {
    const clock = movableClock();
    hub = await startHub({ clock });
    const { cookie } = await hub.signIn('reviewer');
    const [first, second] = await Promise.all([refresh(cookie), refresh(cookie)]);
    expect([first.status, second.status]).toEqual([200, 200]);
    expect(cookieOf(first.headers)).not.toBe(cookie);
    expect(cookieOf(first.headers)).toBe(cookieOf(second.headers));
    clock.move(19_000);
    const late = await refresh(cookie);
    expect(cookieOf(late.headers)).toBe(cookieOf(first.headers));
  });

  it('ends the whole sign-in when an old token comes back after the grace', async () => {
    const clock = movableClock();
    hub = await startHub({ clock });
    const { cookie } = await hub.signIn('reviewer');
    const first = await refresh(cookie);
    clock.move(21_000);
    expect((await refresh(cookie)).status).toBe(401);
    expect((await refresh(cookieOf(first.headers))).status).toBe(401);
    expect((await hub.asking(first.body.accessToken)('GET', '/api/v1/me')).status).toBe(401);
  });

  it('ends it when a token two rotations old comes back, grace or not', async () => {
    hub = await startHub();
    const { cookie } = await hub.signIn('reviewer');
    const second = cookieOf((await refresh(cookie)).headers);
    const third = cookieOf((await refresh(second)).headers);
    expect((await refresh(cookie)).status).toBe(401);
    expect((await refresh(third)).status).toBe(401);
  });

  it('takes the cookie from its own page only', async () => {
    hub = await startHub();
    const { cookie } = await hub.signIn('reviewer');
    expect((await refresh(cookie, undefined)).status).toBe(200);
    const none = await hub.anyone('POST', '/api/v1/session/refresh', {}, { Cookie: cookie });
    expect([none.status, slug(none.body)]).toEqual([403, 'foreign-origin']);
    expect((await refresh(cookie, 'https://elsewhere.example')).status).toBe(403);
    expect((await refresh('turnmark=made-up')).status).toBe(401);
    expect((await refresh('')).status).toBe(401);
  });

  it('refuses an access token after 15 minutes', async () => {
    const clock = movableClock();
    hub = await startHub({ clock });
    const { ask } = await hub.signIn('reviewer');
    clock.move(14 * 60_000);
    expect((await ask('GET', '/api/v1/me')).status).toBe(200);
    clock.move(2 * 60_000);
    const expired = await ask('GET', '/api/v1/me');
    expect(expired.status).toBe(401);
    expect(expired.headers.get('www-authenticate')).toBe('Bearer error="invalid_token"');
  });
});

describe('signing out', () => {
  it('ends this sign-in at once and leaves the others', async () => {
    hub = await startHub();
    const here = await hub.signIn('engineer');
    const there = await hub.signIn('engineer');
    expect((await here.ask('DELETE', '/api/v1/session')).status).toBe(415);
    expect((await here.ask('DELETE', '/api/v1/session', {})).status).toBe(204);
    expect((await here.ask('GET', '/api/v1/me')).status).toBe(401);
    expect((await refresh(here.cookie)).status).toBe(401);
    expect((await there.ask('GET', '/api/v1/me')).status).toBe(200);
  });

  it('works by cookie, from the own page only', async () => {
    hub = await startHub();
    const { cookie, ask } = await hub.signIn('engineer');
    const without = await hub.anyone('DELETE', '/api/v1/session', {}, { Cookie: cookie });
    expect(without.status).toBe(403);
    expect((await ask('GET', '/api/v1/me')).status).toBe(200);
    const own = await hub.anyone('DELETE', '/api/v1/session', {}, { Cookie: cookie, Origin: hub.url });
    expect(own.status).toBe(204);
    expect(own.headers.get('set-cookie')).toMatch(/^turnmark=;.*Expires=Thu, 01 Jan 1970/);
    expect((await ask('GET', '/api/v1/me')).status).toBe(401);
  });

  it('everywhere ends every sign-in of the person, and nobody else’s', async () => {
    hub = await startHub();
    const here = await hub.signIn('engineer');
    const there = await hub.signIn('engineer');
    const other = await hub.signIn('reviewer');
    expect((await here.ask('DELETE', '/api/v1/sessions', {})).status).toBe(204);
    for (const gone of [here, there]) {
      expect((await gone.ask('GET', '/api/v1/me')).status).toBe(401);
      expect((await refresh(gone.cookie)).status).toBe(401);
    }
    expect((await other.ask('GET', '/api/v1/me')).status).toBe(200);
  });
});
