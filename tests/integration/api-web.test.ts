import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startHub } from './api-harness';
import type { TestHub } from './api-harness';

let hub: TestHub;
let webDir: string;
const hash = '0123456789abcdef0123456789abcdef';
const files = {
  'index.html': '<!doctype html><title>page</title>',
  'scheme.js': 'document.title = "x";',
  [`_expo/static/js/web/entry-${hash}.js`]: `console.log("${'a'.repeat(4000)}");`,
  [`assets/font.${hash}.ttf`]: 'font',
};

beforeAll(async () => {
  webDir = mkdtempSync(join(tmpdir(), 'turnmark-web-'));
  for (const [name, text] of Object.entries(files)) {
    mkdirSync(dirname(join(webDir, name)), { recursive: true });
    writeFileSync(join(webDir, name), text);
  }
  hub = await startHub({ webDir });
});
afterAll(async () => {
  await hub.close();
  rmSync(webDir, { recursive: true });
});

const page = { Accept: 'text/html,application/xhtml+xml,*/*;q=0.8' };

describe('the web app', () => {
  it('is the same page at every address of its own, asked for each time', async () => {
    for (const path of ['/', '/rigs', '/shelf/abc', '/sign-in']) {
      const { status, body, headers } = await hub.anyone<string>('GET', path, undefined, page);
      expect([status, body], path).toEqual([200, files['index.html']]);
      expect(headers.get('cache-control')).toBe('no-cache');
    }
  });

  it('lets hashed files be kept for a year, others not', async () => {
    const kept = 'public, max-age=31536000, immutable';
    const cacheOf = async (path: string) => (await hub.anyone('GET', path)).headers.get('cache-control');
    expect(await cacheOf(`/_expo/static/js/web/entry-${hash}.js`)).toBe(kept);
    expect(await cacheOf(`/assets/font.${hash}.ttf`)).toBe(kept);
    expect(await cacheOf('/scheme.js')).toBe('no-cache');
  });

  it('comes compressed', async () => {
    const { headers } = await hub.anyone('GET', `/_expo/static/js/web/entry-${hash}.js`);
    expect(headers.get('content-encoding')).toMatch(/^(gzip|br)$/);
  });

  it('is not what a missing file or an unknown API address gets', async () => {
    const script = await hub.anyone('GET', '/_expo/static/js/web/gone.js', undefined, { Accept: '*/*' });
    expect([script.status, script.headers.get('content-type')]).toEqual([
      404,
      'application/problem+json; charset=utf-8',
    ]);
    expect((await hub.anyone('POST', '/rigs', {}, page)).status).toBe(404);
    for (const path of ['/api/nothing', '/ingest/v1/nothing', '/live/v1']) {
      expect((await hub.anyone('GET', path, undefined, page)).status, path).toBe(404);
    }
    for (const path of ['/..%2f..%2fpackage.json', '/%2e%2e/package.json', '/.env']) {
      expect(JSON.stringify((await hub.anyone('GET', path)).body)).not.toContain('turnmark"');
    }
  });

  it('may run its own scripts only, and tells nobody where it was', async () => {
    const { headers } = await hub.anyone('GET', '/', undefined, page);
    const policy = headers.get('content-security-policy') ?? '';
    expect(policy).toContain("script-src 'self';");
    expect(policy).toContain("object-src 'none'");
    expect(policy).toContain("frame-ancestors 'none'");
    expect(headers.get('referrer-policy')).toBe('no-referrer');
    expect(headers.get('x-content-type-options')).toBe('nosniff');
    expect(headers.get('x-powered-by')).toBeNull();
  });

  it('learns an address that a board can reach', async () => {
    const { ask } = await hub.signIn('reviewer');
    const { body } = await ask<{ mode: string; addresses: string[] }>('GET', '/api/v1/hub');
    expect(body.mode).toBe('demo');
    for (const address of body.addresses) {
      expect(new URL(address).port).toBe(String(hub.port));
      expect(address).not.toMatch(/localhost|127\.0\.0\.1/);
    }
  });
});
