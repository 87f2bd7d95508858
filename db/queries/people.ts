import { newId } from '../ids';
import type { TurnmarkDb } from '../schema';
import type { PersonTable, Role } from '../schema/person';
import { sqliteCode } from '../errors';
import { instant } from './common';
import { before, rowsWanted, toPage } from './page';
import type { Page, PageQuery } from './page';
import { endAllOfPerson } from './sessions';
import type { Result } from '@/signal/model';

export type Person = {
  id: string;
  email: string;
  name: string;
  role: Role;
  disabled: boolean;
  createdAt: string;
};
/** For signing in only. `passwordHash` is null until the person has set a password. */
export type PersonWithSecret = Person & { passwordHash: string | null };
export type EmailTaken = { code: 'email-taken' };

/** Addresses that differ in case only are one person's. */
function emailKey(email: string): string {
  return email.trim().normalize('NFKC').toLowerCase();
}

export async function createPerson(
  db: TurnmarkDb,
  person: { email: string; name: string; role: Role; passwordHash: string | null; nowMs: number },
): Promise<Result<Person, EmailTaken>> {
  const row: PersonTable = {
    id: newId(),
    email: person.email.trim(),
    email_key: emailKey(person.email),
    name: person.name,
    role: person.role,
    password_hash: person.passwordHash,
    disabled: 0,
    created_at_ms: person.nowMs,
  };
  try {
    await db.insertInto('person').values(row).execute();
  } catch (error) {
    if (sqliteCode(error) !== 'SQLITE_CONSTRAINT_UNIQUE') throw error;
    return { ok: false, issue: { code: 'email-taken' } };
  }
  return { ok: true, value: toPerson(row) };
}

export async function getPerson(db: TurnmarkDb, id: string): Promise<Person | null> {
  const row = await db.selectFrom('person').selectAll().where('id', '=', id).executeTakeFirst();
  return row === undefined ? null : toPerson(row);
}

export async function findPersonByEmail(db: TurnmarkDb, email: string): Promise<PersonWithSecret | null> {
  const row = await db
    .selectFrom('person')
    .selectAll()
    .where('email_key', '=', emailKey(email))
    .executeTakeFirst();
  return row === undefined ? null : { ...toPerson(row), passwordHash: row.password_hash };
}

export async function listPeople(db: TurnmarkDb, query: PageQuery): Promise<Page<Person>> {
  let rows = db.selectFrom('person').selectAll();
  if (query.cursor !== null) rows = rows.where(before('created_at_ms', 'id', query.cursor));
  const found = await rows
    .orderBy('created_at_ms', 'desc')
    .orderBy('id', 'desc')
    .limit(rowsWanted(query))
    .execute();
  return toPage(found, query, toPerson, (row) => ({ key: row.created_at_ms, id: row.id }));
}

/**
 * Changes what is given. A new role, a new password or being disabled ends every session of the person, in the same
 * transaction. null: no such person.
 */
export async function updatePerson(
  db: TurnmarkDb,
  id: string,
  patch: { name?: string; role?: Role; passwordHash?: string; disabled?: boolean; nowMs: number },
): Promise<Person | null> {
  return await db.transaction().execute(async (trx) => {
    const person = await getPerson(trx, id);
    if (person === null) return null;
    await trx
      .updateTable('person')
      .set({
        ...(patch.name !== undefined && { name: patch.name }),
        ...(patch.role !== undefined && { role: patch.role }),
        ...(patch.passwordHash !== undefined && { password_hash: patch.passwordHash }),
        disabled: (patch.disabled ?? person.disabled) ? 1 : 0,
      })
      .where('id', '=', id)
      .execute();
    const lessTrusted =
      (patch.role !== undefined && patch.role !== person.role) ||
      patch.passwordHash !== undefined ||
      patch.disabled === true;
    if (lessTrusted) await endAllOfPerson(trx, id, patch.nowMs);
    return await getPerson(trx, id);
  });
}

/** The person's sessions go too; what they made keeps their name. False: no such person. */
export async function deletePerson(db: TurnmarkDb, id: string): Promise<boolean> {
  const { numDeletedRows } = await db.deleteFrom('person').where('id', '=', id).executeTakeFirst();
  return numDeletedRows > 0n;
}

/** Admins who can sign in; the last one must stay. */
export async function countAdmins(db: TurnmarkDb): Promise<number> {
  const { n } = await db
    .selectFrom('person')
    .select((eb) => eb.fn.countAll<number>().as('n'))
    .where('role', '=', 'admin')
    .where('disabled', '=', 0)
    .executeTakeFirstOrThrow();
  return n;
}

function toPerson(row: PersonTable): Person {
  return {
    id: row.id,
    email: row.email,
    name: row.name,
    role: row.role,
    disabled: row.disabled === 1,
    createdAt: instant(row.created_at_ms),
  };
}
