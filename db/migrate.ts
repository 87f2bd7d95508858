import type { Database as Sqlite } from 'better-sqlite3';
import { DbOpenError } from './errors';

/** One step of a file's schema. Frozen once landed: a later step mends it, nobody edits it. */
export type Migration = { number: number; name: string; sql: string };

/**
 * Brings a file to the newest version, each step in a transaction of its own together with `user_version`, so that a
 * kill leaves the file between two steps, never within one. Gives back how many steps were made. Throws `DbOpenError`
 * `newer-version` or `foreign-file`.
 */
export function migrate(
  sqlite: Sqlite,
  file: { name: string; applicationId: number; migrations: readonly Migration[] },
): number {
  const { migrations } = file;
  migrations.forEach((m, i) => {
    if (m.number !== i + 1) throw new Error(`migrate: ${file.name} has number ${m.number} at place ${i + 1}`);
  });
  const version = Number(sqlite.pragma('user_version', { simple: true }));
  const applicationId = Number(sqlite.pragma('application_id', { simple: true }));
  const empty = sqlite.prepare('SELECT 1 FROM sqlite_schema LIMIT 1').get() === undefined;
  if (!empty && applicationId !== file.applicationId) {
    throw new DbOpenError('foreign-file', `${file.name} in the data folder was not made by Turnmark.`);
  }
  if (version > migrations.length) {
    throw new DbOpenError(
      'newer-version',
      `${file.name} was written by a newer Turnmark (its version ${version}, this one knows ${migrations.length}): start the newer one.`,
    );
  }
  const pending = migrations.slice(version);
  for (const migration of pending) {
    sqlite.transaction(() => {
      sqlite.exec(migration.sql);
      sqlite.pragma(`application_id = ${file.applicationId}`);
      sqlite.pragma(`user_version = ${migration.number}`);
    })();
  }
  return pending.length;
}
