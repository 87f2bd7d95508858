/** Why the databases could not be opened; `message` is one sentence for the person who starts the hub. */
export type DbOpenCode =
  | 'unwritable'
  | 'newer-version'
  | 'locked'
  | 'damaged'
  | 'disk-full'
  | 'foreign-file'
  | 'sqlite-too-old'
  | 'unknown';

export class DbOpenError extends Error {
  override readonly name = 'DbOpenError';
  constructor(
    readonly code: DbOpenCode,
    message: string,
    options?: { cause?: unknown },
  ) {
    super(message, options);
  }
}

/** The disk is full or failing: nothing of the write was taken, the database is as it was, trying later is right. */
export class StorageUnavailableError extends Error {
  override readonly name = 'StorageUnavailableError';
  constructor(
    readonly code: 'full' | 'io' | 'busy',
    message: string,
    options?: { cause?: unknown },
  ) {
    super(message, options);
  }
}

/** SQLite's own code of an error (`SQLITE_FULL`, ...), or null where it is no error of SQLite's. */
export function sqliteCode(error: unknown): string | null {
  if (!(error instanceof Error) || !('code' in error)) return null;
  const { code } = error;
  return typeof code === 'string' && code.startsWith('SQLITE_') ? code : null;
}

/** Turns a failing disk's error into a `StorageUnavailableError`; gives back any other as it came. */
export function asStorageError(error: unknown): unknown {
  const code = sqliteCode(error);
  if (code === null) return error;
  if (code === 'SQLITE_FULL') {
    return new StorageUnavailableError('full', 'The disk that holds the data folder is full.', {
      cause: error,
    });
  }
  if (code.startsWith('SQLITE_BUSY')) {
    return new StorageUnavailableError('busy', 'Another process holds the database.', { cause: error });
  }
  if (code.startsWith('SQLITE_IOERR') || code.startsWith('SQLITE_READONLY') || code === 'SQLITE_CANTOPEN') {
    return new StorageUnavailableError('io', 'The disk that holds the data folder cannot be written.', {
      cause: error,
    });
  }
  return error;
}
