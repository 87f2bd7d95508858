import { session, type User } from '@/server/contract';
import type { Access } from '@/client/data/access';
import type { Api } from '@/client/data/api';
import { ApiProblem } from '@/client/data/api-problem';
import { Emitter } from '@/client/data/emitter';
import { send, type Fetch } from '@/client/data/http';

export type SessionState =
  | { status: 'restoring' }
  /** `ended`: the hub closed the session (expired, signed out everywhere, role changed). */
  | { status: 'signed-out'; why: 'none' | 'asked' | 'ended' }
  /** The hub did not answer at start, so nobody knows yet. */
  | { status: 'unreachable'; problem: ApiProblem }
  | { status: 'signed-in'; user: User };

type Parts = { fetch: Fetch; access: Access; api: Api };

/** Who is signed in. Starts with `restore()`, which asks the hub by the refresh cookie. */
export class SessionStore {
  readonly #parts: Parts;
  readonly #emitter = new Emitter();
  #state: SessionState = { status: 'restoring' };

  constructor(parts: Parts) {
    this.#parts = parts;
    parts.access.listen({
      renewed: (fresh) => this.#commit({ status: 'signed-in', user: fresh.user }),
      ended: () => {
        const known = this.#state.status === 'signed-in';
        this.#commit({ status: 'signed-out', why: known ? 'ended' : 'none' });
      },
    });
  }

  subscribe = (listener: () => void) => this.#emitter.subscribe(listener);
  getSnapshot = () => this.#state;

  async restore(): Promise<void> {
    if (this.#state.status === 'unreachable') this.#commit({ status: 'restoring' });
    try {
      await this.#parts.access.refresh();
    } catch (error) {
      if (!(error instanceof ApiProblem)) throw error;
      if (this.#state.status === 'restoring') this.#commit({ status: 'unreachable', problem: error });
    }
  }

  /** Throws `ApiProblem`: `not-signed-in` for a wrong address or password, `too-many-requests`, `offline`. */
  async signIn(email: string, password: string): Promise<void> {
    const call = { method: 'POST', path: '/session', body: { email, password }, answer: session } as const;
    this.#parts.access.take(await send(this.#parts.fetch, call, null));
  }

  /** Throws `ApiProblem` where the hub could not be told; the sign-in then still stands. */
  signOut(): Promise<void> {
    return this.#end('/session');
  }

  /** Ends every session of this person, on every device. */
  signOutEverywhere(): Promise<void> {
    return this.#end('/sessions');
  }

  async #end(path: string): Promise<void> {
    try {
      await this.#parts.api.delete(path);
    } catch (error) {
      if (!(error instanceof ApiProblem) || error.status !== 401) throw error;
    }
    this.#parts.access.drop();
    this.#commit({ status: 'signed-out', why: 'asked' });
  }

  #commit(next: SessionState): void {
    const now = this.#state;
    // A renewed token of the same person is no news to the screens.
    if (now.status === 'signed-in' && next.status === 'signed-in' && sameUser(now.user, next.user)) return;
    this.#state = next;
    this.#emitter.emit();
  }
}

function sameUser(a: User, b: User): boolean {
  return a.id === b.id && a.role === b.role && a.name === b.name && a.email === b.email;
}
