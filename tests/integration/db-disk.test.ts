import { mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import BetterSqlite from 'better-sqlite3';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openDatabases } from '@/db';
import type { SegmentWrite } from '@/db';
import { prepareChild } from './db-process';

let dataDir: string;
beforeEach(() => {
  dataDir = mkdtempSync(join(tmpdir(), 'db-disk-'));
});
afterEach(() => {
  rmSync(dataDir, { recursive: true, force: true });
});

describe('a disk that takes no more', () => {
  it('fails the commit with a typed error, loses nothing of those before, and serves again after a purge', async () => {
    const end = await (
      await prepareChild('db-spool-writer')
    )([dataDir, '100000', 'keep'], () => false, 12 * 1024);
    expect(end.errors).toBe('');
    expect(end.code).toBe(0);
    const acked = Math.max(...end.lines.filter((l) => l.startsWith('ack ')).map((l) => Number(l.slice(4))));
    const told = end.lines.slice(end.lines.findIndex((l) => l.startsWith('unavailable ')));
    expect(told[0]).toMatch(/^unavailable (io|full)$/);
    expect(told[1]).toBe(`held ${acked} of ${acked}`);
    expect(told.slice(2)).toEqual(['purged 16', 'committed again']);
    const sqlite = new BetterSqlite(join(dataDir, 'spool.db'));
    expect(sqlite.pragma('integrity_check', { simple: true })).toBe('ok');
    sqlite.close();
  });
});

describe('the rolling spool', () => {
  it('reuses its space: the file stops growing once the lookback is full', async () => {
    const { spool, close } = openDatabases({ dataDir, durability: 'normal' });
    const streamId = spool.openStream({ rigId: 'r', name: 's', rateHz: 1, channels: ['A'], nowMs: 0 });
    let at = 0;
    let seed = 1;
    function segment(): SegmentWrite {
      seed = Math.imul(seed, 1_664_525) + 1_013_904_223;
      const count = 2048 + ((seed >>> 16) % 30_720);
      const made = {
        streamId,
        startIndex: at,
        count,
        firstSeq: 0,
        lastSeq: 0,
        timeS: null,
        receivedAtMs: at,
      };
      at += count;
      return { ...made, channels: [{ name: 'A', samples: new Int16Array(count) }] };
    }
    // The lookback holds about 10 MB; 20 of them pass through.
    const lookback = 5_000_000;
    const sizes: number[] = [];
    let largest = 0;
    for (let full = 1; full <= 20; full++) {
      while (at < full * lookback) {
        spool.commit({
          segments: Array.from({ length: 8 }, segment),
          early: [],
          releasedEarly: [],
          gaps: [],
          streams: [],
        });
        spool.purge(at - lookback, 32, []);
        largest = Math.max(largest, statSync(join(dataDir, 'spool.db-wal')).size);
      }
      sizes.push(spool.size().fileBytes);
    }
    expect(Math.max(...sizes)).toBeLessThan(1.25 * sizes[1]!);
    expect(Math.max(...sizes)).toBeLessThan(1.5 * 2 * lookback);
    expect(largest).toBeLessThan(16 * 1024 * 1024);
    await close();
    expect(statSync(join(dataDir, 'spool.db')).size).toBeLessThan(1.5 * 2 * lookback);
  });
});
