import { session, type Session } from '@/server/contract';
import { ApiProblem } from '@/client/data/api-problem';
import { send, type Fetch } from '@/client/data/http';
import type { Clock } from '@/client/data/clock';

/** Share of a token's life after which a fresh one is fetched unasked. */
const renewAtShare = 0.8;
/** setTimeout takes 31 bits. */
const longestTimerMs = 2_000_000_000;

export type AccessEvents = {
  /** A fresh token came, by sign-in or by refresh. */
  renewed: (session: Session) => void;
  /** The hub no longer knows this sign-in. */
  ended: () => void;
};

/**
 * The access token, in memory only, and its renewal through the refresh cookie. At most one refresh is under way;
 * all who need one wait for the same.
 */
export class Access {
  readonly #fetch: Fetch;
  readonly #clock: Clock;
  readonly #events: AccessEvents[] = [];
  #token: string | null = null;
  #inFlight: Promise<Session> | null = null;
  #timer: unknown = null;
  /** Counts sign-ins and sign-outs: an answer that was asked for before one of them is too late to be taken. */
  #era = 0;

  constructor(fetch: Fetch, clock: Clock) {
    this.#fetch = fetch;
    this.#clock = clock;
  }

  get token(): string | null {
    return this.#token;
  }

  listen(events: AccessEvents): () => void {
    this.#events.push(events);
    return () => this.#events.splice(this.#events.indexOf(events), 1);
  }

  /** After a sign-in. */
  take(fresh: Session): void {
    this.#era += 1;
    this.#inFlight = null;
    this.#accept(fresh);
  }

  /** After a sign-out: forgets the token, and any refresh under way. */
  drop(): void {
    this.#era += 1;
    this.#inFlight = null;
    this.#token = null;
    this.#clock.clearTimeout(this.#timer);
  }

  /** A fresh token. Throws `ApiProblem`; `not-signed-in` also ends the session. */
  refresh(): Promise<Session> {
    this.#inFlight ??= this.#refresh().finally(() => {
      this.#inFlight = null;
    });
    return this.#inFlight;
  }

  async #refresh(): Promise<Session> {
    const era = this.#era;
    try {
      const fresh = await send(
        this.#fetch,
        { method: 'POST', path: '/session/refresh', answer: session },
        null,
      );
      if (era !== this.#era) throw signedOutMeanwhile();
      this.#accept(fresh);
      return fresh;
    } catch (error) {
      const refused = error instanceof ApiProblem && (error.status === 401 || error.status === 403);
      if (refused && era === this.#era) {
        this.drop();
        for (const events of [...this.#events]) events.ended();
      }
      throw error;
    }
  }

  #accept(fresh: Session): void {
    this.#token = fresh.accessToken;
    this.#clock.clearTimeout(this.#timer);
    const waitMs = Math.min(fresh.expiresInS * 1000 * renewAtShare, longestTimerMs);
    // Offline at that moment: the next call finds the token expired and refreshes then.
    this.#timer = this.#clock.setTimeout(() => void this.refresh().catch(() => undefined), waitMs);
    for (const events of [...this.#events]) events.renewed(fresh);
  }
}

function signedOutMeanwhile(): ApiProblem {
  return new ApiProblem({
    kind: 'refused',
    slug: 'not-signed-in',
    status: 401,
    title: 'Signed out',
    detail: 'You signed out meanwhile.',
    errors: [],
    retryAfterS: null,
  });
}
