import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import BetterSqlite from 'better-sqlite3';
import type { Database as Sqlite } from 'better-sqlite3';
import { Kysely, SqliteDialect } from 'kysely';
import { DbOpenError, sqliteCode } from './errors';
import { migrate } from './migrate';
import type { Migration } from './migrate';
import { migrations } from './migrations';
import type { TurnmarkDb, TurnmarkSchema } from './schema';
import { createSpool } from './spool';
import { spoolMigrations } from './spool-migrations';
import type { Spool } from './spool-types';

export type Durability = 'normal' | 'full';
export type OpenOptions = { dataDir: string; durability: Durability };
export type Databases = {
  /** People, rigs, settings, captures: through Kysely only, so that no statement slips into another's transaction. */
  db: TurnmarkDb;
  /** Closed with the rest; disposable: a missing file is made anew. */
  spool: Spool;
  close(): Promise<void>;
};

export type SqliteFile = {
  name: 'turnmark.db' | 'spool.db';
  applicationId: number;
  migrations: readonly Migration[];
  synchronous: 'NORMAL' | 'FULL';
  /** Held by this process alone for as long as it is open. */
  exclusive: boolean;
};

const oldestGoodSqlite = '3.51.3';
const pageBytes = 16_384;
/** Pages; small, since the checkpoint runs within a commit and blocks the event loop. */
const walAutocheckpoint = 128;
const journalLimitBytes = 64 * 1024 * 1024;

/**
 * Opens (and makes, and migrates) both files of a data folder; `':memory:'` for tests. One hub a folder: `spool.db` is
 * locked for as long as it is open, and the lock ends with the process, however that ends. Throws `DbOpenError`.
 */
export function openDatabases({ dataDir, durability }: OpenOptions): Databases {
  const inMemory = dataDir === ':memory:';
  if (!inMemory) makeFolder(dataDir);
  const spoolSqlite = openFile(dataDir, {
    name: 'spool.db',
    applicationId: 0x746d7370,
    migrations: spoolMigrations,
    synchronous: durability === 'full' ? 'FULL' : 'NORMAL',
    exclusive: true,
  });
  let sqlite: Sqlite;
  try {
    sqlite = openFile(dataDir, {
      name: 'turnmark.db',
      applicationId: 0x746d646d,
      migrations,
      synchronous: 'FULL',
      exclusive: false,
    });
    // What a kill left half kept.
    sqlite.exec('DELETE FROM capture WHERE kept = 0');
  } catch (error) {
    spoolSqlite.close();
    throw error;
  }
  const db = new Kysely<TurnmarkSchema>({ dialect: new SqliteDialect({ database: sqlite }) });
  return {
    db,
    spool: createSpool(spoolSqlite),
    async close() {
      await db.destroy();
      spoolSqlite.close();
    },
  };
}

/** Opens one file with its pragmas set, locked where exclusive, and migrated. Throws `DbOpenError`. */
export function openFile(dataDir: string, file: SqliteFile): Sqlite {
  const path = dataDir === ':memory:' ? ':memory:' : join(dataDir, file.name);
  let sqlite: Sqlite | null = null;
  try {
    sqlite = new BetterSqlite(path, { timeout: 2000 });
    checkSqliteVersion(String(sqlite.prepare('SELECT sqlite_version()').pluck().get()));
    // The page size must come before the file's first page, the locking mode before the first use of the WAL.
    sqlite.pragma(`page_size = ${pageBytes}`);
    if (file.exclusive) sqlite.pragma('locking_mode = EXCLUSIVE');
    sqlite.pragma('journal_mode = WAL');
    sqlite.pragma(`synchronous = ${file.synchronous}`);
    sqlite.pragma(`wal_autocheckpoint = ${walAutocheckpoint}`);
    sqlite.pragma(`journal_size_limit = ${journalLimitBytes}`);
    sqlite.pragma('foreign_keys = ON');
    sqlite.exec('BEGIN IMMEDIATE; COMMIT');
    migrate(sqlite, file);
    return sqlite;
  } catch (error) {
    sqlite?.close();
    throw openError(error, file.name, dataDir);
  }
}

/** Older ones can corrupt a WAL file when two connections meet at a reset. Throws `DbOpenError` `sqlite-too-old`. */
export function checkSqliteVersion(version: string): void {
  const rank = (text: string) => text.split('.').reduce((sum, part) => sum * 1000 + Number(part), 0);
  if (!(rank(version) >= rank(oldestGoodSqlite))) {
    throw new DbOpenError(
      'sqlite-too-old',
      `SQLite ${version} is too old to be trusted with this data: ${oldestGoodSqlite} or newer is needed.`,
    );
  }
}

function makeFolder(dataDir: string): void {
  try {
    mkdirSync(dataDir, { recursive: true, mode: 0o700 });
  } catch (error) {
    throw unwritable(dataDir, error);
  }
}

function unwritable(dataDir: string, cause: unknown): DbOpenError {
  return new DbOpenError('unwritable', `The data folder ${dataDir} cannot be written.`, { cause });
}

function openError(error: unknown, name: string, dataDir: string): unknown {
  if (error instanceof DbOpenError) return error;
  const code = sqliteCode(error);
  // Not the file's fault: its stack is what helps.
  if (code === null) return error;
  if (code.startsWith('SQLITE_BUSY') || code.startsWith('SQLITE_LOCKED')) {
    return new DbOpenError('locked', `Another hub is running on the data folder ${dataDir}.`, {
      cause: error,
    });
  }
  if (code.startsWith('SQLITE_CORRUPT') || code === 'SQLITE_NOTADB') {
    const way =
      name === 'spool.db' ? 'move it away to start without its lookback' : 'restore it from a backup';
    return new DbOpenError('damaged', `${name} in the data folder is damaged: ${way}.`, { cause: error });
  }
  if (code === 'SQLITE_FULL') {
    return new DbOpenError('disk-full', `The disk that holds the data folder ${dataDir} is full.`, {
      cause: error,
    });
  }
  if (/^SQLITE_(CANTOPEN|READONLY|IOERR|PERM|AUTH)/.test(code)) return unwritable(dataDir, error);
  return new DbOpenError('unknown', `${name} in the data folder ${dataDir} could not be opened (${code}).`, {
    cause: error,
  });
}
