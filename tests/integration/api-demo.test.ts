import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Live, Rig, RigKey, SettingsVersion } from '@/server/contract';
import { startHub } from './api-harness';
import type { Ask, TestHub } from './api-harness';

type List<T> = { items: T[] };
let dataDir: string;
let hub: TestHub | undefined;

beforeAll(() => {
  dataDir = mkdtempSync(join(tmpdir(), 'turnmark-demo-'));
});
afterAll(async () => {
  await hub?.close();
  rmSync(dataDir, { recursive: true });
});

async function startDemo() {
  hub = await startHub({}, { dataDir, demoRigs: true });
  const { ask } = await hub.signIn('engineer');
  return { hub, ask };
}

const rigsOf = async (ask: Ask) => (await ask<List<Rig>>('GET', '/api/v1/rigs')).body.items;
const keysOf = async (ask: Ask, rig: Rig) =>
  (await ask<List<RigKey>>('GET', `/api/v1/rigs/${rig.id}/keys`)).body.items;

/** Asks until the rig's blocks come. */
async function streaming(ask: Ask, rig: Rig): Promise<Live> {
  for (;;) {
    const { body } = await ask<Live>('GET', `/api/v1/rigs/${rig.id}/live`);
    if (body.lastBlockAt !== null) return body;
  }
}

describe('the demo lab', () => {
  it('streams its rigs through the public door, and comes back with the same rigs and a fresh key each', async () => {
    const first = await startDemo();
    const rigs = await rigsOf(first.ask);
    expect(rigs.length).toBe(3);
    const keys = new Set<string>();
    for (const rig of rigs) {
      expect((await streaming(first.ask, rig)).stream).not.toBeNull();
      const { items } = (await first.ask<List<SettingsVersion>>('GET', `/api/v1/rigs/${rig.id}/settings`))
        .body;
      expect(items.map(({ version }) => version)).toEqual([1]);
      for (const key of await keysOf(first.ask, rig)) keys.add(key.id);
    }
    expect(keys.size).toBe(3);
    await first.ask('PATCH', `/api/v1/rigs/${rigs[0]!.id}`, { name: 'Renamed' });
    const { ask: admin } = await first.hub.signIn('admin');
    expect((await admin('DELETE', `/api/v1/rigs/${rigs[1]!.id}`)).status).toBe(204);
    await first.hub.close();

    const second = await startDemo();
    const again = await rigsOf(second.ask);
    expect(again.map(({ id }) => id)).toEqual([rigs[0]!.id, rigs[2]!.id]);
    expect(again[0]?.name).toBe('Renamed');
    for (const rig of again) {
      await streaming(second.ask, rig);
      const now = await keysOf(second.ask, rig);
      expect(now.length).toBe(1);
      expect(keys.has(now[0]!.id)).toBe(false);
    }
  }, 180_000);
});
