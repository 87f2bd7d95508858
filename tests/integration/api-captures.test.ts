import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Analysis } from '@/signal/model';
import type { Capture, Problem, Rig, RigKeyCreated, Samples } from '@/server/contract';
import { plainRig, startHub } from './api-harness';
import type { Ask, TestHub } from './api-harness';

type List<T> = { items: T[]; nextCursor: string | null };
const rateHz = 1000;
const toothHz = 20;

let hub: TestHub;
let engineer: Ask;
let admin: Ask;
let reviewer: Ask;
let rig: Rig;
let board: Ask;

/** Codes of a tooth wheel's signal, 1 mV each: 1.5 V, swinging by 1 V. */
function codes(from: number, count: number): number[] {
  return Array.from({ length: count }, (_, i) =>
    Math.round(1500 + 1000 * Math.sin((2 * Math.PI * toothHz * (from + i)) / rateHz)),
  );
}

const block = (stream: string, seq: number, from: number, count: number) => ({
  stream,
  seq,
  rate: rateHz,
  codes: true,
  samples: { A: codes(from, count) },
});
const keep = (body: object) => engineer<Capture>('POST', `/api/v1/rigs/${rig.id}/captures`, body);

beforeAll(async () => {
  hub = await startHub();
  engineer = (await hub.signIn('engineer')).ask;
  admin = (await hub.signIn('admin')).ask;
  reviewer = (await hub.signIn('reviewer')).ask;
  rig = (await engineer<Rig>('POST', '/api/v1/rigs', plainRig)).body;
  const key = await engineer<RigKeyCreated>('POST', `/api/v1/rigs/${rig.id}/keys`, { name: 'board' });
  board = hub.asking(key.body.key);
});
afterAll(() => hub.close());

describe('Keep', () => {
  it('has nothing to keep before the first block', async () => {
    const { status, body } = await keep({ lastSeconds: 10 });
    expect([status, (body as unknown as Problem).type]).toEqual([
      409,
      'urn:turnmark:problem:nothing-to-keep',
    ]);
  });

  it('keeps what is there, however much more was asked for', async () => {
    for (let i = 0; i < 4; i++)
      expect((await board('POST', '/ingest/v1/samples', block('one', i, i * 1000, 1000))).status).toBe(202);
    const all = await keep({ lastSeconds: 60, tags: ['first', 'first'], note: 'gap 0.8 mm' });
    expect(all.status).toBe(201);
    expect(all.body).toMatchObject({
      rigId: rig.id,
      title: 'Bench fan, 4 s',
      tags: ['first'],
      stream: 'one',
      durationS: 4,
      rateHz,
      channels: ['A'],
      createdBy: 'Jory Pellander',
      rig: { ...rig },
      settings: { version: 0 },
    });
    expect(all.body).not.toHaveProperty('createdById');
    expect(all.headers.get('location')).toBe(`/api/v1/captures/${all.body.id}`);
    expect((await reviewer('GET', `/api/v1/captures/${all.body.id}`)).body).toEqual(all.body);
    expect((await keep({ lastSeconds: 1.5, title: 'The end' })).body.durationS).toBe(1.5);
    expect((await keep({ stream: 'one', fromS: 1, toS: 3, title: 'The middle' })).body.durationS).toBe(2);
    expect((await keep({ stream: 'none', fromS: 1, toS: 3 })).status).toBe(409);
    expect((await keep({ stream: 'one', fromS: 3, toS: 1 })).status).toBe(422);
    expect((await keep({ lastSeconds: 0 })).status).toBe(422);
  });
});

describe('the Shelf', () => {
  it('is found by tag, words and rig, newest first', async () => {
    const titles = async (query: string) =>
      (await reviewer<List<Capture>>('GET', `/api/v1/captures${query}`)).body.items.map(({ title }) => title);
    expect(await titles('')).toEqual(['The middle', 'The end', 'Bench fan, 4 s']);
    expect(await titles('?tag=first')).toEqual(['Bench fan, 4 s']);
    expect(await titles('?q=midd')).toEqual(['The middle']);
    expect(await titles('?q=gap')).toEqual(['Bench fan, 4 s']);
    expect(await titles(`?rig=${rig.id}&limit=1`)).toEqual(['The middle']);
    expect(await titles('?rig=none')).toEqual([]);
    expect((await reviewer('GET', '/api/v1/captures?finding=made-up')).status).toBe(422);
  });

  it('is changed by engineers, and deleted by whose it is or an admin', async () => {
    const mine = (await keep({ lastSeconds: 1, title: 'Mine' })).body;
    const path = `/api/v1/captures/${mine.id}`;
    expect((await reviewer('PATCH', path, { title: 'No' })).status).toBe(403);
    const changed = await engineer<Capture>('PATCH', path, { title: 'Still mine', tags: ['b', 'a'] });
    expect(changed.body).toMatchObject({ title: 'Still mine', tags: ['b', 'a'], note: '' });
    expect((await engineer('PATCH', path, { title: '' })).status).toBe(422);
    expect((await reviewer('DELETE', path)).status).toBe(403);
    const theirs = await admin<Capture>('POST', `/api/v1/rigs/${rig.id}/captures`, {
      lastSeconds: 1,
      title: 'Theirs',
    });
    expect((await engineer('DELETE', `/api/v1/captures/${theirs.body.id}`)).status).toBe(403);
    expect((await admin('DELETE', `/api/v1/captures/${theirs.body.id}`)).status).toBe(204);
    expect((await engineer('DELETE', path)).status).toBe(204);
    expect((await engineer('GET', path)).status).toBe(404);
  });
});

describe('samples', () => {
  let path: string;
  beforeAll(async () => {
    const { items } = (await reviewer<List<Capture>>('GET', '/api/v1/captures?tag=first')).body;
    path = `/api/v1/captures/${items[0]!.id}/samples`;
  });
  const get = (query: string) => reviewer<Samples>('GET', `${path}?${query}`);

  it('are the samples themselves where they are few', async () => {
    const { body } = await get('channel=A&fromS=0.5&toS=0.6&points=200');
    expect(body).toMatchObject({ channel: 'A', rateHz, fromS: 0.5, stepS: 0.001, kind: 'raw' });
    expect(body.v).toEqual(codes(500, 100).map((code) => code * 0.001));
  });

  it('are columns of all samples where they are many', async () => {
    const { body } = await get('channel=A&points=40');
    expect(body.kind).toBe('minmax');
    expect(body.min!.length).toBeLessThanOrEqual(40);
    const volts = codes(0, 4000).map((code) => code * 0.001);
    expect(Math.min(...(body.min as number[]))).toBe(Math.min(...volts));
    expect(Math.max(...(body.max as number[]))).toBe(Math.max(...volts));
  });

  it('come filtered as the band sees them: here there is no filter', async () => {
    // Between two samples the nearer one counts, for both.
    for (const range of ['fromS=0.5&toS=0.6', 'fromS=0.5006&toS=0.5991']) {
      const raw = await get(`channel=A&${range}&points=200`);
      const filtered = await get(`channel=A&${range}&points=200&signal=filtered`);
      expect(filtered.body).toEqual(raw.body);
    }
    const wide = await get('channel=A&points=40');
    const wideFiltered = await get('channel=A&points=40&signal=filtered');
    expect(wideFiltered.body).toEqual(wide.body);
  });

  it('are refused for what the capture does not have', async () => {
    expect((await get('channel=B')).status).toBe(422);
    expect((await get('channel=A&fromS=2&toS=1')).status).toBe(422);
    expect((await get('channel=A&points=0')).status).toBe(422);
    expect((await reviewer('GET', '/api/v1/captures/none/samples?channel=A')).status).toBe(404);
  });
});

describe('analysis', () => {
  let id: string;
  beforeAll(async () => {
    id = (await reviewer<List<Capture>>('GET', '/api/v1/captures?tag=first')).body.items[0]!.id;
  });

  it('counts the teeth and finds the speed', async () => {
    const { status, body } = await reviewer<Analysis>('GET', `/api/v1/captures/${id}/analysis`);
    expect(status).toBe(200);
    const rising = body.channels.A!.edges.filter((edge) => edge.rising);
    expect(Math.abs(rising.length - 4 * toothHz)).toBeLessThanOrEqual(1);
    expect(body.pulses).toBe(rising.length);
    const known = body.speed.filter(({ rpm }) => rpm !== null);
    expect(known.at(-1)!.rpm).toBeCloseTo((60 * toothHz) / 24, 1);
    expect((await reviewer('GET', `/api/v1/captures/${id}/analysis`)).body).toEqual(body);
  });

  it('runs under other settings and another wheel', async () => {
    const settings = { band: { mode: 'fixed', operateV: 2, releaseV: 1 } };
    const { body } = await reviewer<Analysis>('POST', `/api/v1/captures/${id}/analysis`, {
      settings,
      wheel: { pulsesPerTurn: 12 },
    });
    expect(body.channels.A).toMatchObject({ operateV: 2, releaseV: 1 });
    expect(body.speed.findLast(({ rpm }) => rpm !== null)!.rpm).toBeCloseTo((60 * toothHz) / 12, 1);
  });

  it('filters forward and backward on request: no delay, and the edges stand where they stood', async () => {
    const filter = { kind: 'lowpass', family: 'butterworth', order: 2, cutoffHz: 40 };
    const run = async (zeroPhase: boolean) =>
      (
        await reviewer<Analysis>('POST', `/api/v1/captures/${id}/analysis`, {
          settings: { filter },
          zeroPhase,
        })
      ).body;
    const [once, both] = [await run(false), await run(true)];
    expect(once.delayS).toBeGreaterThan(0.001);
    expect(both.delayS).toBe(0);
    const { edges } = both.channels.A!;
    expect(edges.length).toBeGreaterThan(150);
    for (const { midT, rising } of edges.slice(4, -4)) {
      const half = 2 * toothHz * midT;
      expect(Math.abs(half - Math.round(half))).toBeLessThan(0.01);
      expect(Math.round(half) % 2).toBe(rising ? 0 : 1);
    }
    expect(both.statistics!.channels.A!.sine!.offsetV).toBeCloseTo(1.5, 2);
  });

  it('says which setting cannot be run', async () => {
    const filter = { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 600 };
    const { status, body } = await reviewer<Problem>('POST', `/api/v1/captures/${id}/analysis`, {
      settings: { filter },
    });
    expect([status, body.errors?.[0]?.pointer]).toEqual([422, '/settings/filter/cutoffHz']);
  });

  it('shows the signal filtered both ways beside the one that the filter delays', async () => {
    const filter = { kind: 'lowpass', family: 'butterworth', order: 2, cutoffHz: 40 };
    const settings = { filter, reason: 'to see the delay' };
    expect((await engineer('POST', `/api/v1/rigs/${rig.id}/settings`, settings)).status).toBe(201);
    await board('POST', '/ingest/v1/samples', block('filtered', 0, 0, 2000));
    const kept = (await keep({ lastSeconds: 2, title: 'Filtered' })).body;
    const of = async (signal: string) => {
      const path = `/api/v1/captures/${kept.id}/samples?channel=A&fromS=1.01&toS=1.1&points=200&signal=${signal}`;
      return (await reviewer<Samples>('GET', path)).body.v as number[];
    };
    const [raw, once, both] = [await of('raw'), await of('filtered'), await of('zero-phase')];
    const rise = (volts: number[]) => volts.findIndex((v, i) => i > 0 && volts[i - 1]! < 1.5 && v >= 1.5);
    expect(Math.abs(rise(both) - rise(raw))).toBeLessThanOrEqual(1);
    expect(rise(once) - rise(raw)).toBeGreaterThan(3);
    expect(Math.max(...both)).toBeLessThan(Math.max(...once));
  });

  it('knows the gap, and the shelf knows the finding', async () => {
    await board('POST', '/ingest/v1/samples', [block('two', 0, 0, 1000), block('two', 1, 1000, 1000)]);
    // Numbers 2 to 4 never come; 64 later ones declare them lost.
    const later = Array.from({ length: 64 }, (_, i) => block('two', 5 + i, 5000 + i * 50, 50));
    expect((await board('POST', '/ingest/v1/samples', later)).status).toBe(202);
    const kept = await keep({ lastSeconds: 60, title: 'With a gap' });
    expect(kept.body.findings.map(({ code }) => code)).toContain('lost-samples');
    const { body } = await reviewer<Analysis>('GET', `/api/v1/captures/${kept.body.id}/analysis`);
    expect(body.gaps).toEqual([{ from: 2, to: 5, lostSamples: 3000, estimated: true }]);
    const hole = await reviewer<Samples>(
      'GET',
      `/api/v1/captures/${kept.body.id}/samples?channel=A&fromS=3&toS=3.1`,
    );
    expect(hole.body.v).toEqual(Array.from({ length: 100 }, () => null));
    const found = await reviewer<List<Capture>>('GET', '/api/v1/captures?finding=lost-samples');
    expect(found.body.items.map(({ title }) => title)).toEqual(['With a gap']);
  });
});
