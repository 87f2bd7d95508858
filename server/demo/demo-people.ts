/** The demo lab's people. They exist in the demo only. */
import { createPerson, findPersonByEmail, updatePerson } from '@/db';
import type { AppContext } from '@/server/context';

export const demoPeople = [
  { email: 'admin@turnmark.example', name: 'Maren Aldwick', role: 'admin' },
  { email: 'engineer@turnmark.example', name: 'Jory Pellander', role: 'engineer' },
  { email: 'reviewer@turnmark.example', name: 'Sunniva Okar', role: 'reviewer' },
] as const;

/** Each of them can sign in with the demo's password, which may have changed since the last start. */
export async function prepareDemoPeople({ db, clock, passwords, secrets }: AppContext): Promise<void> {
  const password = secrets.demoPassword;
  if (password === undefined) throw new Error('the demo has no password');
  await Promise.all(
    demoPeople.map(async (person) => {
      const known = await findPersonByEmail(db, person.email);
      if (known !== null && (await passwords.matches(known.passwordHash ?? undefined, password))) return;
      const passwordHash = await passwords.hash(password);
      const nowMs = clock.nowMs();
      if (known === null) await createPerson(db, { ...person, passwordHash, nowMs });
      else await updatePerson(db, known.id, { passwordHash, nowMs });
    }),
  );
}
