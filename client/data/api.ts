import type { z } from 'zod';
import type { Access } from '@/client/data/access';
import { ApiProblem } from '@/client/data/api-problem';
import { send, type Call, type Fetch } from '@/client/data/http';

/**
 * Calls of someone who is signed in. An answer `401` fetches a fresh token once and asks again; a second one is
 * thrown. Throws `ApiProblem`.
 */
export class Api {
  readonly #fetch: Fetch;
  readonly #access: Access;

  constructor(fetch: Fetch, access: Access) {
    this.#fetch = fetch;
    this.#access = access;
  }

  async call<S extends z.ZodType>(call: Call<S>): Promise<z.output<S>> {
    const token = this.#access.token;
    if (token !== null) {
      try {
        return await send(this.#fetch, call, token);
      } catch (error) {
        if (!(error instanceof ApiProblem) || error.status !== 401) throw error;
      }
    }
    // Someone else may have fetched a fresh one while this call was under way.
    const other = this.#access.token;
    const fresh = other !== null && other !== token ? other : (await this.#access.refresh()).accessToken;
    return send(this.#fetch, call, fresh);
  }

  get<S extends z.ZodType>(path: string, answer: S, more: Pick<Call<S>, 'query' | 'signal'> = {}) {
    return this.call({ method: 'GET', path, answer, ...more });
  }

  post<S extends z.ZodType>(path: string, body: unknown, answer: S) {
    return this.call({ method: 'POST', path, body, answer });
  }

  patch<S extends z.ZodType>(path: string, body: unknown, answer: S) {
    return this.call({ method: 'PATCH', path, body, answer });
  }

  async delete(path: string): Promise<void> {
    await this.call({ method: 'DELETE', path });
  }
}

/** A path from its parts, each encoded: `pathOf('rigs', rigId)`. */
export function pathOf(...parts: string[]): string {
  return parts.map((part) => `/${encodeURIComponent(part)}`).join('');
}
