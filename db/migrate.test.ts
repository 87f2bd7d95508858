import { createHash } from 'node:crypto';
import BetterSqlite from 'better-sqlite3';
import { describe, expect, it } from 'vitest';
import { migrate } from './migrate';
import { migrations } from './migrations';
import { spoolMigrations } from './spool-migrations';

const steps = [
  { number: 1, name: 'one', sql: 'CREATE TABLE a (x INTEGER) STRICT' },
  { number: 2, name: 'two', sql: 'CREATE TABLE b (x INTEGER) STRICT; INSERT INTO a VALUES (1)' },
];
const file = { name: 'test.db', applicationId: 7 };

function version(sqlite: BetterSqlite.Database) {
  return sqlite.pragma('user_version', { simple: true });
}

describe('migrate', () => {
  it('takes only the steps that are missing', () => {
    const sqlite = new BetterSqlite(':memory:');
    expect(migrate(sqlite, { ...file, migrations: steps.slice(0, 1) })).toBe(1);
    expect(migrate(sqlite, { ...file, migrations: steps })).toBe(1);
    expect(migrate(sqlite, { ...file, migrations: steps })).toBe(0);
    expect(version(sqlite)).toBe(2);
    expect(sqlite.prepare('SELECT count(*) FROM a').pluck().get()).toBe(1);
  });

  it('leaves nothing of a step that fails half-way', () => {
    const sqlite = new BetterSqlite(':memory:');
    const broken = [
      steps[0]!,
      { number: 2, name: 'broken', sql: 'CREATE TABLE b (x); INSERT INTO nowhere VALUES (1)' },
    ];
    expect(() => migrate(sqlite, { ...file, migrations: broken })).toThrow('nowhere');
    expect(version(sqlite)).toBe(1);
    expect(sqlite.prepare("SELECT name FROM sqlite_schema WHERE type = 'table'").pluck().all()).toEqual([
      'a',
    ]);
  });

  it('refuses numbers out of order', () => {
    const sqlite = new BetterSqlite(':memory:');
    expect(() => migrate(sqlite, { ...file, migrations: [steps[1]!] })).toThrow('number 2 at place 1');
  });
});

describe('the schemas', () => {
  it.each([
    ['turnmark.db', migrations],
    ['spool.db', spoolMigrations],
  ] as const)('%s: every table is strict and every foreign key is served by an index', (name, all) => {
    const sqlite = new BetterSqlite(':memory:');
    migrate(sqlite, { name, applicationId: 1, migrations: all });
    const tables = sqlite
      .prepare<[], { name: string; strict: number }>(
        "SELECT name, strict FROM pragma_table_list WHERE type = 'table' AND schema = 'main' AND name NOT LIKE 'sqlite_%'",
      )
      .all();
    expect(tables.length).toBeGreaterThan(3);
    expect(tables.filter((t) => t.strict === 0)).toEqual([]);
    for (const { name: table } of tables) {
      const keys = sqlite
        .prepare<[string], { from: string }>('SELECT "from" FROM pragma_foreign_key_list(?)')
        .all(table);
      for (const key of keys) {
        const leading = sqlite
          .prepare(
            `SELECT 1 FROM pragma_index_list(@table) AS list, pragma_index_info(list.name) AS info
             WHERE info.seqno = 0 AND info.name = @column`,
          )
          .get({ table, column: key.from });
        expect(leading, `${table}.${key.from}`).toBeDefined();
      }
    }
  });

  it('are frozen: a step that has landed is never edited', () => {
    const fingerprint = (sql: string) => createHash('sha256').update(sql).digest('hex').slice(0, 16);
    expect(migrations.map((m) => `${m.number} ${m.name} ${fingerprint(m.sql)}`)).toEqual([
      '1 init f7da12ce3e75fe97',
    ]);
    expect(spoolMigrations.map((m) => `${m.number} ${m.name} ${fingerprint(m.sql)}`)).toEqual([
      '1 init 6119d88181476d65',
    ]);
  });
});
