import type { HubMessage } from '@/server/contract';
import { Emitter } from '@/client/data/emitter';
import { LiveLink, type LinkParts } from '@/client/data/live-link';
import { LiveRigs } from '@/client/data/live-rigs';
import type { Connection, LiveSnapshot } from '@/client/data/live-types';
import { mergeWishes, type Wish } from '@/client/data/live-wishes';

export type LiveParts = LinkParts & {
  /** Runs it once at the next animation frame. */
  schedule: (run: () => void) => void;
};

/** How long the link stays up after the last wish, ms: going from one screen to the next must not cut it. */
export const lingerMs = 3_000;

/**
 * The one live session of the page. It connects when the first wish comes while the page is seen, suspends after
 * the last, and comes back by itself. Listeners hear at most once a scheduled frame, however many messages came;
 * `getSnapshot` changes only then.
 */
export class LiveStore {
  readonly #parts: LiveParts;
  readonly #emitter = new Emitter();
  readonly #wishes = new Set<Wish>();
  readonly #rigs: LiveRigs;
  readonly #link: LiveLink;
  #connection: Connection = { status: 'idle' };
  #snapshot: LiveSnapshot = { connection: { status: 'idle' }, rigs: new Map() };
  #hidden = false;
  #dirty = false;
  #syncDue = false;
  #lingerTimer: unknown = null;
  #sent = '';

  constructor(parts: LiveParts) {
    this.#parts = parts;
    this.#rigs = new LiveRigs(parts.clock, () => this.#mark());
    this.#link = new LiveLink(parts, {
      changed: (connection) => this.#onLink(connection),
      welcomed: () => this.#sendWishes(),
      message: (message) => this.#onMessage(message),
    });
  }

  subscribe = (listener: () => void) => this.#emitter.subscribe(listener);
  getSnapshot = () => this.#snapshot;

  /** Asks for a rig until the function returned is called. */
  watch(wish: Wish): () => void {
    this.#wishes.add(wish);
    this.#syncSoon();
    return () => {
      this.#wishes.delete(wish);
      this.#syncSoon();
    };
  }

  /** A page that nobody sees needs no frames. */
  setHidden(hidden: boolean): void {
    this.#hidden = hidden;
    this.#syncSoon();
  }

  /** The session's token was renewed, or someone signed in: the hub is told, or tried again. */
  tokenRenewed(): void {
    this.#link.dispatch({ type: 'token-renewed' });
  }

  /** Signed out: the link ends at once, and what is known is forgotten. */
  signedOut(): void {
    this.#suspend();
    this.#rigs.keepOnly(new Set());
    this.#mark();
  }

  // A screen that changes its wish takes the old one back first; only the end of the turn counts.
  #syncSoon(): void {
    if (this.#syncDue) return;
    this.#syncDue = true;
    queueMicrotask(() => {
      this.#syncDue = false;
      this.#sync();
    });
  }

  #sync(): void {
    this.#rigs.keepOnly(new Set([...this.#wishes].map((wish) => wish.rigId)));
    const { clock } = this.#parts;
    clock.clearTimeout(this.#lingerTimer);
    if (this.#wishes.size === 0 || this.#hidden) {
      this.#lingerTimer = clock.setTimeout(() => this.#suspend(), lingerMs);
      return;
    }
    this.#link.dispatch({ type: 'wanted' });
    this.#sendWishes();
  }

  #suspend(): void {
    this.#parts.clock.clearTimeout(this.#lingerTimer);
    this.#link.dispatch({ type: 'unwanted' });
  }

  #sendWishes(): void {
    if (this.#connection.status !== 'live') return;
    const message = mergeWishes(this.#wishes);
    const text = JSON.stringify(message);
    if (text === this.#sent) return;
    this.#sent = text;
    this.#link.send(message);
  }

  #onLink(connection: Connection): void {
    this.#connection = connection;
    if (connection.status !== 'live') {
      this.#sent = '';
      this.#rigs.allStale();
    }
    this.#mark();
  }

  #onMessage(message: HubMessage): void {
    if (message.type === 'frame') this.#rigs.take(message);
    if (message.type === 'gone') this.#rigs.remove(message.rigId);
  }

  #mark(): void {
    if (this.#dirty) return;
    this.#dirty = true;
    this.#parts.schedule(() => {
      this.#dirty = false;
      this.#snapshot = { connection: this.#connection, rigs: this.#rigs.snapshot() };
      this.#emitter.emit();
    });
  }
}
