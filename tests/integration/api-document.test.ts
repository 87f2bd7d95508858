import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { apiRoutes } from '@/server/routes';
import { startHub } from './api-harness';
import type { TestHub } from './api-harness';

type Document = {
  openapi: string;
  paths: Record<string, Record<string, { security?: object[] }>>;
  components: { schemas: object };
};
let hub: TestHub;
let document: Document;

beforeAll(async () => {
  hub = await startHub();
  document = (await hub.anyone<Document>('GET', '/api/v1/openapi.json')).body;
});
afterAll(() => hub.close());

/** Calls of api.md, written down here once more, so that a route that got lost is missed. */
const promised = [
  'POST /session',
  'POST /session/refresh',
  'DELETE /session',
  'DELETE /sessions',
  'GET /me',
  'GET /rigs',
  'POST /rigs',
  'GET /rigs/{rigId}',
  'PATCH /rigs/{rigId}',
  'DELETE /rigs/{rigId}',
  'GET /rigs/{rigId}/keys',
  'POST /rigs/{rigId}/keys',
  'DELETE /rigs/{rigId}/keys/{keyId}',
  'GET /rigs/{rigId}/settings',
  'POST /rigs/{rigId}/settings',
  'GET /rigs/{rigId}/live',
  'POST /rigs/{rigId}/captures',
  'POST /captures',
  'GET /captures',
  'GET /captures/{captureId}',
  'PATCH /captures/{captureId}',
  'DELETE /captures/{captureId}',
  'GET /captures/{captureId}/samples',
  'GET /captures/{captureId}/analysis',
  'POST /captures/{captureId}/analysis',
  'GET /captures/{captureId}/export',
];

function callsOf(document: Document, prefix: string): string[] {
  return Object.entries(document.paths)
    .filter(([path]) => path.startsWith(prefix))
    .flatMap(([path, item]) =>
      Object.keys(item).map((method) => `${method.toUpperCase()} ${path.slice(prefix.length)}`),
    );
}

describe('the OpenAPI document', () => {
  it('is 3.1 and holds every promised call', () => {
    expect(document.openapi).toBe('3.1.0');
    expect(callsOf(document, '/api/v1')).toEqual(expect.arrayContaining(promised));
  });

  it('describes what the web server really answers, call by call, and nothing else', async () => {
    const described = callsOf(document, '/api/v1').sort();
    const { ask } = await hub.signIn('admin');
    for (const call of described) {
      const [method = '', path = ''] = call.split(' ');
      const { status, body } = await ask(
        method,
        `/api/v1${path.replaceAll(/\{\w+\}/g, 'none')}`,
        method === 'GET' ? undefined : {},
      );
      const lost = status === 405 || (status === 404 && /no such address/.test(JSON.stringify(body)));
      expect(lost, `${call}: ${status}`).toBe(false);
    }
    const mounted = apiRoutes(hub.context).map(
      ({ method, path }) => `${method.toUpperCase()} ${path.replaceAll(/:(\w+)/g, '{$1}')}`,
    );
    expect(described).toEqual(mounted.sort());
  });

  it('says where a sign-in or a key is needed', () => {
    expect(document.paths['/api/v1/rigs']?.get?.security).toEqual([{ accessToken: [] }]);
    expect(document.paths['/api/v1/session']?.post?.security).toBeUndefined();
    expect(document.paths['/ingest/v1/samples']?.post?.security).toEqual([{ rigKey: [] }]);
    expect(Object.keys(document.components.schemas)).toEqual(
      expect.arrayContaining(['Rig', 'Settings', 'Capture', 'Analysis', 'Live', 'Problem', 'Block']),
    );
  });

  it('has no reference to a shape that it does not hold', () => {
    const wanted = [...JSON.stringify(document).matchAll(/#\/components\/schemas\/([^"]+)/g)].map(
      ([, name]) => name!,
    );
    expect(wanted.length).toBeGreaterThan(10);
    expect(Object.keys(document.components.schemas)).toEqual(expect.arrayContaining([...new Set(wanted)]));
  });
});

describe('the readable page', () => {
  it('names every call and loads nothing from elsewhere', async () => {
    const { status, body, headers } = await hub.anyone<string>('GET', '/api/docs');
    expect([status, headers.get('content-type')]).toEqual([200, 'text/html; charset=utf-8']);
    for (const path of Object.keys(document.paths)) expect(body).toContain(`<code>${path}</code>`);
    expect(body).not.toMatch(/<script|src=|@import|url\(/);
    expect(
      [...body.matchAll(/href="([^"]+)"/g)].map(([, href]) => href!).every((h) => /^(#|\/api\/)/.test(h)),
    ).toBe(true);
    for (const [, anchor] of body.matchAll(/href="#([^"]+)"/g)) expect(body).toContain(`id="${anchor}"`);
  });
});
