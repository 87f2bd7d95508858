import { hubMessage, type HubMessage, type ViewerMessage } from '@/server/contract';
import type { Clock } from '@/client/data/clock';

/** The members of a browser's WebSocket that are touched; a fake needs just these. */
export type RawSocket = {
  readyState: number;
  onopen: ((event: never) => void) | null;
  onmessage: ((event: { data: unknown }) => void) | null;
  onclose: ((event: { code: number }) => void) | null;
  onerror: ((event: never) => void) | null;
  send: (text: string) => void;
  close: (code?: number) => void;
};

export type OpenSocket = () => RawSocket;

/**
 * A dead link shows only by silence: a browser can neither send nor see pings. The hub sends a frame of every
 * watched rig at least once a second, silent rigs too.
 */
export const idleTimeoutMs = 10_000;

/** Close code of our own for a link that went dead; the hub never sends it. */
export const closedAsIdle = 4900;

export type SocketEvents = {
  opened: () => void;
  message: (message: HubMessage) => void;
  /** Once, also when the link never opened or went idle. */
  closed: (code: number) => void;
};

/** One connection, used once. Messages are checked against the contract; those of a newer hub are passed over. */
export class LiveSocket {
  readonly #raw: RawSocket;
  readonly #clock: Clock;
  readonly #events: SocketEvents;
  #timer: unknown = null;
  #over = false;

  constructor(open: OpenSocket, clock: Clock, events: SocketEvents) {
    this.#clock = clock;
    this.#events = events;
    const raw = open();
    this.#raw = raw;
    raw.onopen = () => {
      this.#heard();
      events.opened();
    };
    raw.onmessage = ({ data }) => {
      this.#heard();
      const message = readMessage(data);
      if (message && !this.#over) events.message(message);
    };
    raw.onclose = ({ code }) => this.#finish(code);
    raw.onerror = () => undefined;
    this.#heard();
  }

  send(message: ViewerMessage): void {
    if (this.#raw.readyState === 1) this.#raw.send(JSON.stringify(message));
  }

  /** Ends it without an event. */
  dispose(): void {
    this.#over = true;
    this.#clock.clearTimeout(this.#timer);
    this.#raw.close(1000);
  }

  #heard(): void {
    this.#clock.clearTimeout(this.#timer);
    if (this.#over) return;
    this.#timer = this.#clock.setTimeout(() => {
      this.#raw.close(1000);
      this.#finish(closedAsIdle);
    }, idleTimeoutMs);
  }

  #finish(code: number): void {
    if (this.#over) return;
    this.#over = true;
    this.#clock.clearTimeout(this.#timer);
    this.#events.closed(code);
  }
}

function readMessage(data: unknown): HubMessage | null {
  if (typeof data !== 'string') return null;
  try {
    const read = hubMessage.safeParse(JSON.parse(data));
    return read.success ? read.data : null;
  } catch {
    return null;
  }
}

/** The live socket's address from the page's own. */
export function liveUrl(pageOrigin: string): string {
  return `${pageOrigin.replace(/^http/, 'ws')}/live/v1`;
}
