/** The hub's public calls as a lab's own scripts make them: rigs, keys, settings, captures. */
import { sharedHub } from '@/tests/e2e/bench-person';
import type { Who } from '@/tests/e2e/bench-person';
import type { Capture, Rig } from '@/server/contract';
import type { Analysis } from '@/signal/model';

export type Call = <T>(method: string, path: string, body?: unknown) => Promise<T>;

export async function api(who: Who = 'engineer', hub = sharedHub()): Promise<Call> {
  const signedIn = await fetch(`${hub.url}/api/v1/session`, {
    method: 'POST',
    headers: { 'content-type': 'application/json' },
    body: JSON.stringify({ email: `${who}@turnmark.example`, password: hub.password }),
  });
  const { accessToken } = (await signedIn.json()) as { accessToken: string };
  return async <T>(method: string, path: string, body?: unknown): Promise<T> => {
    const answer = await fetch(`${hub.url}/api/v1${path}`, {
      method,
      headers: { authorization: `Bearer ${accessToken}`, 'content-type': 'application/json' },
      ...(body === undefined ? {} : { body: JSON.stringify(body) }),
    });
    if (!answer.ok) throw new Error(`${method} ${path}: ${answer.status} ${await answer.text()}`);
    return (answer.status === 204 ? undefined : await answer.json()) as T;
  };
}

export async function demoRig(call: Call, name: string): Promise<Rig> {
  const { items } = await call<{ items: Rig[] }>('GET', '/rigs');
  const found = items.find((rig) => rig.name === name);
  if (!found) throw new Error(`the demo lab has no ${name}`);
  return found;
}

/** A rig with one linear sensor before a wheel of 24 teeth, and a key for its board. */
export async function makeRig(call: Call, name: string): Promise<{ rig: Rig; key: string }> {
  const rig = await call<Rig>('POST', '/rigs', {
    name,
    sensing: 'single',
    wheel: { pulsesPerTurn: 24 },
    channels: [{ name: 'A', role: 'A', maxInputV: 3.3, sensor: { kind: 'linear', supplyV: 3.3 } }],
    ratedRpm: 600,
  });
  const { key } = await call<{ key: string }>('POST', `/rigs/${rig.id}/keys`, { name: 'Bench board' });
  return { rig, key };
}

export const keepLast = (call: Call, rigId: string, seconds: number, title: string) =>
  call<Capture>('POST', `/rigs/${rigId}/captures`, { lastSeconds: seconds, title, tags: [], note: '' });

export const analysisOf = (call: Call, captureId: string) =>
  call<Analysis>('GET', `/captures/${captureId}/analysis`);
