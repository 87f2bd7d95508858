import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import BetterSqlite from 'better-sqlite3';
import { sql } from 'kysely';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { DbOpenError } from './errors';
import { checkSqliteVersion, openDatabases, openFile } from './open';
import type { Databases, SqliteFile } from './open';
import { spoolMigrations } from './spool-migrations';

let dataDir: string;
let opened: Databases[] = [];

beforeEach(() => {
  dataDir = mkdtempSync(join(tmpdir(), 'db-open-'));
});
afterEach(async () => {
  for (const databases of opened) await databases.close();
  opened = [];
  rmSync(dataDir, { recursive: true, force: true });
});

function open(dir = dataDir): Databases {
  const databases = openDatabases({ dataDir: dir, durability: 'normal' });
  opened.push(databases);
  return databases;
}

async function closeAll() {
  for (const databases of opened) await databases.close();
  opened = [];
}

function failure(dir = dataDir): DbOpenError {
  try {
    open(dir);
  } catch (error) {
    if (error instanceof DbOpenError) return error;
    throw error;
  }
  throw new Error('it opened');
}

function raw(name: string, change: (sqlite: BetterSqlite.Database) => void) {
  const sqlite = new BetterSqlite(join(dataDir, name));
  change(sqlite);
  sqlite.close();
}

describe('pragmas take effect', () => {
  const spoolFile: SqliteFile = {
    name: 'spool.db',
    applicationId: 0x746d7370,
    migrations: spoolMigrations,
    synchronous: 'NORMAL',
    exclusive: true,
  };
  const pragmas = [
    'page_size',
    'journal_mode',
    'synchronous',
    'wal_autocheckpoint',
    'foreign_keys',
    'locking_mode',
  ];

  it.each([
    ['NORMAL', 1],
    ['FULL', 2],
  ] as const)('of the spool, synchronous %s', (synchronous, code) => {
    const sqlite = openFile(dataDir, { ...spoolFile, synchronous });
    const read = Object.fromEntries(pragmas.map((p) => [p, sqlite.pragma(p, { simple: true })]));
    sqlite.close();
    expect(read).toEqual({
      page_size: 16_384,
      journal_mode: 'wal',
      synchronous: code,
      wal_autocheckpoint: 128,
      foreign_keys: 1,
      locking_mode: 'exclusive',
    });
  });

  it('of the database of people and captures, whatever the durability asked for', async () => {
    const { db } = open();
    const read = async (name: string) =>
      Object.values((await sql.raw(`PRAGMA ${name}`).execute(db)).rows[0] as object)[0];
    expect(await read('journal_mode')).toBe('wal');
    expect(await read('synchronous')).toBe(2);
    expect(await read('foreign_keys')).toBe(1);
    expect(await read('page_size')).toBe(16_384);
    await expect(
      db
        .insertInto('rig_key')
        .values({
          id: 'k',
          rig_id: 'no such rig',
          name: 'key',
          created_at_ms: 0,
          created_by: 'x',
          created_by_id: null,
          revoked_at_ms: null,
          last_used_at_ms: null,
        })
        .execute(),
    ).rejects.toThrow('FOREIGN KEY');
  });
});

describe('opening again', () => {
  it('finds what was there', async () => {
    const first = open();
    first.spool.openStream({ rigId: 'r', name: 's', rateHz: 10, channels: ['A'], nowMs: 0 });
    await closeAll();
    expect(open().spool.findStream('r', 's')?.rateHz).toBe(10);
  });

  it('starts without a spool', async () => {
    open();
    await closeAll();
    for (const end of ['', '-wal', '-shm']) rmSync(join(dataDir, `spool.db${end}`), { force: true });
    expect(open().spool.streamsOf('r')).toEqual([]);
  });
});

describe('refuses, in one sentence,', () => {
  it('a folder that another hub holds, and opens once it let go', async () => {
    open();
    const error = failure();
    expect(error.code).toBe('locked');
    expect(error.message).toMatch(/^Another hub is running on the data folder .*\.$/);
    await closeAll();
    open();
  });

  it.each(['turnmark.db', 'spool.db'])('%s from a newer version, leaving it untouched', async (name) => {
    open();
    await closeAll();
    raw(name, (sqlite) => sqlite.pragma('user_version = 9999'));
    const error = failure();
    expect(error.code).toBe('newer-version');
    expect(error.message).toContain(name);
    expect(error.message).toContain('9999');
    raw(name, (sqlite) => expect(sqlite.pragma('user_version', { simple: true })).toBe(9999));
  });

  it.each(['turnmark.db', 'spool.db'])('%s made by another program', (name) => {
    raw(name, (sqlite) => sqlite.exec('CREATE TABLE theirs (x)'));
    expect(failure().code).toBe('foreign-file');
  });

  it.each(['turnmark.db', 'spool.db'])('%s that is no database', (name) => {
    writeFileSync(join(dataDir, name), 'this is no database, '.repeat(2000));
    const error = failure();
    expect(error.code).toBe('damaged');
    expect(error.message).toContain(name);
  });

  it('a folder that cannot be made or written', () => {
    writeFileSync(join(dataDir, 'file'), '');
    expect(failure(join(dataDir, 'file')).code).toBe('unwritable');
    expect(failure(join(dataDir, 'file', 'below')).code).toBe('unwritable');
  });

  it('an SQLite that can corrupt a WAL file', () => {
    for (const version of ['3.51.2', '3.7.0', 'unreadable']) {
      expect(() => checkSqliteVersion(version)).toThrow(DbOpenError);
    }
    for (const version of ['3.51.3', '3.53.2', '4.0.0']) checkSqliteVersion(version);
  });

  it('without keeping the lock that it had already taken', async () => {
    writeFileSync(join(dataDir, 'turnmark.db'), 'this is no database, '.repeat(2000));
    expect(failure().code).toBe('damaged');
    rmSync(join(dataDir, 'turnmark.db'));
    open();
  });
});
