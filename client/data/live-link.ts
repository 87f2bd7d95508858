import { liveClose, type HubMessage, type ViewerMessage } from '@/server/contract';
import { ApiProblem } from '@/client/data/api-problem';
import { backoffMs } from '@/client/data/backoff';
import type { Clock } from '@/client/data/clock';
import type { Connection } from '@/client/data/live-types';
import { LiveSocket, type OpenSocket } from '@/client/data/socket';

export type LinkParts = {
  open: OpenSocket;
  clock: Clock;
  /** 0 to 1. */
  random: () => number;
  /** A token for `hello`; `fresh` when the last one was refused. Throws `ApiProblem`. */
  token: (fresh: boolean) => Promise<string>;
};

export type LinkEvents = {
  changed: (connection: Connection) => void;
  /** The hub has taken the token: now it listens to `watch`. */
  welcomed: () => void;
  message: (message: HubMessage) => void;
};

export type LinkEvent =
  | { type: 'wanted' | 'unwanted' | 'retry-due' | 'token-renewed' }
  | { type: 'token-came'; token: string; attemptId: number }
  | { type: 'token-refused'; problem: ApiProblem; attemptId: number }
  | { type: 'message'; message: HubMessage }
  | { type: 'socket-closed'; code: number };

/** The connection to the hub as a state machine: facts go in by `dispatch`, the state comes out by `changed`. */
export class LiveLink {
  readonly #parts: LinkParts;
  readonly #events: LinkEvents;
  #connection: Connection = { status: 'idle' };
  #socket: LiveSocket | null = null;
  #retryTimer: unknown = null;
  /** Losses since the last welcome. */
  #losses = 0;
  /** Tokens asked for by an attempt that is over come too late. */
  #attemptId = 0;

  constructor(parts: LinkParts, events: LinkEvents) {
    this.#parts = parts;
    this.#events = events;
  }

  send(message: ViewerMessage): void {
    if (this.#connection.status === 'live') this.#socket?.send(message);
  }

  dispatch(event: LinkEvent): void {
    switch (event.type) {
      case 'wanted':
        if (this.#connection.status === 'idle') this.#connect(false);
        return;
      case 'unwanted':
        this.#losses = 0;
        return this.#rest({ status: 'idle' });
      case 'retry-due':
        if (this.#connection.status === 'waiting' || this.#connection.status === 'failed')
          this.#connect(false);
        return;
      case 'token-renewed':
        return this.#greetAgain();
      case 'token-came':
        if (event.attemptId === this.#attemptId) this.#open(event.token);
        return;
      case 'token-refused':
        if (event.attemptId !== this.#attemptId) return;
        return event.problem.status === 401 ? this.#fail('not-signed-in') : this.#wait();
      case 'message':
        return this.#hear(event.message);
      case 'socket-closed':
        return this.#lost(event.code);
      default:
        return notHandled(event);
    }
  }

  #hear(message: HubMessage): void {
    if (message.type === 'welcome') {
      this.#losses = 0;
      this.#move({ status: 'live' });
      this.#events.welcomed();
    }
    this.#events.message(message);
  }

  #lost(code: number): void {
    if (code === liveClose.forbidden) return this.#fail('forbidden');
    // A token that ran out just now is no reason to wait; one refused again is.
    if (code === liveClose.notSignedIn && this.#losses === 0) {
      this.#losses = 1;
      return this.#connect(true);
    }
    this.#wait();
  }

  #connect(freshToken: boolean): void {
    this.#rest({ status: 'connecting' });
    const attemptId = this.#attemptId;
    this.#parts.token(freshToken).then(
      (token) => this.dispatch({ type: 'token-came', token, attemptId }),
      (error: unknown) => {
        const problem = error instanceof ApiProblem ? error : ApiProblem.offline();
        this.dispatch({ type: 'token-refused', problem, attemptId });
      },
    );
  }

  #open(token: string): void {
    const socket: LiveSocket = new LiveSocket(this.#parts.open, this.#parts.clock, {
      opened: () => socket.send({ type: 'hello', accessToken: token }),
      message: (message) => this.dispatch({ type: 'message', message }),
      closed: (code) => this.dispatch({ type: 'socket-closed', code }),
    });
    this.#socket = socket;
  }

  #greetAgain(): void {
    if (this.#connection.status === 'failed') return this.#connect(false);
    if (this.#connection.status !== 'live') return;
    this.#parts.token(false).then(
      (accessToken) => this.send({ type: 'hello', accessToken }),
      () => undefined,
    );
  }

  #wait(): void {
    const waitMs = backoffMs(this.#losses, this.#parts.random());
    this.#losses += 1;
    const retryAtMs = this.#parts.clock.nowMs() + waitMs;
    this.#rest({ status: 'waiting', retryAtMs, losses: this.#losses, retry: this.#retry });
    this.#retryTimer = this.#parts.clock.setTimeout(this.#retry, waitMs);
  }

  #fail(why: 'not-signed-in' | 'forbidden'): void {
    this.#rest({ status: 'failed', why, retry: this.#retry });
  }

  #retry = () => this.dispatch({ type: 'retry-due' });

  /** A state without a socket. */
  #rest(next: Connection): void {
    this.#attemptId += 1;
    this.#parts.clock.clearTimeout(this.#retryTimer);
    this.#socket?.dispose();
    this.#socket = null;
    this.#move(next);
  }

  #move(next: Connection): void {
    this.#connection = next;
    this.#events.changed(next);
  }
}

function notHandled(event: never): never {
  throw new Error(`not handled: ${JSON.stringify(event)}`);
}
