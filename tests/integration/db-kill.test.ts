import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import BetterSqlite from 'better-sqlite3';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { createCaptureStore, firstPage, listCaptures, openDatabases } from '@/db';
import { prepareChild } from './db-process';

let dataDir: string;
beforeEach(() => {
  dataDir = mkdtempSync(join(tmpdir(), 'db-kill-'));
});
afterEach(() => {
  rmSync(dataDir, { recursive: true, force: true });
});

/** Both files, as a fresh process finds them. */
function integrity(): unknown[] {
  return ['spool.db', 'turnmark.db'].map((name) => {
    const sqlite = new BetterSqlite(join(dataDir, name));
    const found = sqlite.pragma('integrity_check', { simple: true });
    sqlite.close();
    return found;
  });
}

const numberAfter = (word: string, lines: readonly string[]) =>
  Math.max(0, ...lines.filter((l) => l.startsWith(`${word} `)).map((l) => Number(l.split(' ')[1])));

describe('a hub killed at any instant', { timeout: 300_000 }, () => {
  it('has every sample that it acknowledged, each right, and nothing half', async () => {
    // After so many lines of the child; each round goes on where the one before was killed.
    const killAfter = [
      2, 3, 5, 8, 13, 21, 34, 55, 89, 144, 7, 11, 17, 29, 41, 61, 2, 90, 4, 120, 33, 6, 77, 19,
    ];
    const run = await prepareChild('db-spool-writer');
    let acked = 0;
    let purgedTo = 0;
    for (const lines of killAfter) {
      const end = await run([dataDir, '100000', 'purge'], (_, count) => count === lines);
      expect(end.errors).toBe('');
      expect(end.signal).toBe('SIGKILL');
      expect(numberAfter('open', end.lines)).toBeGreaterThanOrEqual(acked);
      acked = Math.max(acked, numberAfter('ack', end.lines));
      purgedTo = Math.max(purgedTo, numberAfter('purging', end.lines));

      const { spool, close } = openDatabases({ dataDir, durability: 'normal' });
      const stream = spool.findStream('rig', 'boot')!;
      // Only what a purge was told of may be gone; a row holds at most 5,120 samples.
      const oldest = spool.oldestIndex(stream.streamId)!;
      expect(oldest).toBeLessThanOrEqual(purgedTo + 6000);
      let next = oldest;
      for (const segment of spool.readSegments(stream.streamId, 0, Infinity)) {
        expect(segment.startIndex).toBe(next);
        for (const { samples } of segment.channels) {
          expect(samples.length).toBe(segment.count);
          expect(samples.findIndex((value, i) => value !== next + i)).toBe(-1);
        }
        next += segment.count;
      }
      expect(next).toBeGreaterThanOrEqual(acked);
      expect(stream).toMatchObject({ nextIndex: next, state: `{"next":${next}}` });
      await close();
      expect(integrity()).toEqual(['ok', 'ok']);
    }
    expect(acked).toBeGreaterThan(1_000_000);
    expect(purgedTo).toBeGreaterThan(0);
  });

  it('has every capture that it told of, whole, and no trace of one that was being kept', async () => {
    const run = await prepareChild('db-capture-keeper');
    const told: string[] = [];
    for (const lines of [1, 2, 3, 2, 1, 4]) {
      const end = await run([dataDir], (_, count) => count === lines);
      expect(end.errors).toBe('');
      told.push(...end.lines.filter((l) => l.startsWith('kept ')).map((l) => l.slice(5)));

      const { db, close } = openDatabases({ dataDir, durability: 'normal' });
      const listed = (await listCaptures(db, firstPage)).items;
      expect(listed.map((c) => c.id)).toEqual(expect.arrayContaining(told));
      expect((await db.selectFrom('capture').select('kept').execute()).filter((c) => c.kept === 0)).toEqual(
        [],
      );
      for (const capture of listed) {
        let at = 0;
        const range = { fromIndex: 0, toIndex: 600_000 };
        for await (const piece of createCaptureStore(db).readChunks(capture.id, ['A'], range)) {
          expect(piece.startIndex).toBe(at);
          const wrong = (value: number, i: number) => value !== Math.imul(at + i, 2_654_435_761);
          expect(piece.channels[0]!.samples.findIndex(wrong)).toBe(-1);
          at += piece.count;
        }
        expect(at).toBe(600_000);
      }
      await close();
      expect(integrity()).toEqual(['ok', 'ok']);
    }
    expect(told.length).toBeGreaterThanOrEqual(7);
  });
});
