/**
 * One viewer's socket. Frames may be dropped, and the drop is counted: a viewer that lags gets the newest, and never
 * slows a rig. What it must know (state, findings, edges of the window) comes whole with its next frame.
 */
import type { WebSocket } from 'ws';
import type { HubMessage, RibbonWish } from '@/server/contract';
import { liveClose, viewerMessage } from '@/server/contract';
import type { LiveFeed, VerifyViewer, ViewerIdentity } from '@/server/live/live-feed';

const helloWithinMs = 5_000;
const pingEveryMs = 20_000;
/** A page being watched gets a frame at most so often, ms. */
const detailFrameMs = 45;
/** Rows of a list share a viewer's budget: the more rows, the slower each, between the two. */
const msARow = 15;
const slowestRowMs = 240;
/** A frame comes at least so often, so that a silent rig is seen to be silent. */
const heartbeatMs = 500;
const historyEveryMs = 1_000;
const maxBufferedBytes = 256 * 1024;
const maxMessageBytes = 64 * 1024;

type Watched = {
  rigId: string;
  ribbon: RibbonWish | null;
  detail: boolean;
  lastFrameMs: number;
  lastHistoryMs: number;
  dropped: number;
  due: ReturnType<typeof setTimeout> | undefined;
  unwatch: () => void;
};

export type ViewerOptions = { feed: LiveFeed; verify: VerifyViewer; nowMs: () => number };

export class Viewer {
  identity: ViewerIdentity | null = null;
  readonly #watched = new Map<string, Watched>();
  readonly #hello: ReturnType<typeof setTimeout>;
  readonly #beat: ReturnType<typeof setInterval>;
  readonly #ping: ReturnType<typeof setInterval>;
  #expiry: ReturnType<typeof setTimeout> | undefined;
  #inTurn: Promise<void> = Promise.resolve();
  #alive = true;
  #closed = false;

  constructor(
    private readonly socket: WebSocket,
    private readonly options: ViewerOptions,
    private readonly onClose: (viewer: Viewer) => void,
  ) {
    this.#hello = setTimeout(() => this.close(liveClose.notSignedIn, 'no token came'), helloWithinMs);
    this.#beat = setInterval(() => this.#heartbeat(), heartbeatMs);
    this.#ping = setInterval(() => this.#checkAlive(), pingEveryMs);
    socket.on('message', (data, isBinary) => {
      // In order, also while the token is still being checked: a viewer need not wait for its welcome.
      this.#inTurn = this.#inTurn.then(() => this.#receive(data as Buffer, isBinary));
    });
    socket.on('pong', () => (this.#alive = true));
    socket.on('close', () => this.#dispose());
    socket.on('error', () => socket.terminate());
  }

  close(code: number, reason: string): void {
    this.socket.close(code, reason);
    // A peer that does not answer the closing handshake must not keep what it may no longer see.
    this.#dispose();
  }

  async #receive(data: Buffer, isBinary: boolean): Promise<void> {
    if (this.#closed) return;
    if (isBinary || data.length > maxMessageBytes) return this.close(1003, 'JSON text only');
    let json: unknown;
    try {
      json = JSON.parse(data.toString('utf8'));
    } catch {
      return this.close(1007, 'not JSON');
    }
    const message = viewerMessage.safeParse(json);
    if (!message.success) {
      return this.#problem('invalid', 'This message is not one that the live socket knows.');
    }
    if (message.data.type === 'hello') return this.#greet(message.data.accessToken);
    if (this.identity === null) return this.close(liveClose.notSignedIn, 'the token comes first');
    this.#watch(message.data.rigs);
  }

  async #greet(accessToken: string): Promise<void> {
    const identity = await this.options.verify(accessToken);
    if (this.#closed) return;
    if (identity === null) return this.close(liveClose.notSignedIn, 'not signed in');
    if (this.identity !== null && this.identity.personId !== identity.personId) {
      return this.close(liveClose.notSignedIn, 'another person');
    }
    this.identity = identity;
    clearTimeout(this.#hello);
    clearTimeout(this.#expiry);
    const leftMs = identity.expiresAtMs - this.options.nowMs();
    this.#expiry = setTimeout(
      () => this.close(liveClose.notSignedIn, 'the sign-in ended'),
      Math.max(0, leftMs),
    );
    this.#send({ type: 'welcome', expiresInS: Math.max(0, leftMs / 1000) });
  }

  #watch(rigs: { rigId: string; ribbon: RibbonWish | null; detail: boolean }[]): void {
    const wanted = new Map(rigs.map((rig) => [rig.rigId, rig]));
    for (const [rigId, watched] of this.#watched) {
      if (!wanted.has(rigId)) this.#forget(watched);
    }
    for (const wish of wanted.values()) {
      const known = this.#watched.get(wish.rigId);
      if (known !== undefined) {
        Object.assign(known, { ribbon: wish.ribbon, detail: wish.detail });
        this.#frame(known);
        continue;
      }
      const watched: Watched = {
        ...wish,
        lastFrameMs: 0,
        lastHistoryMs: 0,
        dropped: 0,
        due: undefined,
        unwatch: () => undefined,
      };
      watched.unwatch = this.options.feed.watch(wish.rigId, () => this.#news(watched));
      this.#watched.set(wish.rigId, watched);
      this.#frame(watched);
    }
  }

  #news(watched: Watched): void {
    if (watched.due !== undefined) return;
    const row = Math.min(slowestRowMs, Math.max(detailFrameMs, msARow * this.#watched.size));
    const spacingMs = watched.detail ? detailFrameMs : row;
    const waitMs = watched.lastFrameMs + spacingMs - this.options.nowMs();
    if (waitMs <= 0) return this.#frame(watched);
    watched.due = setTimeout(() => this.#frame(watched), waitMs);
  }

  #heartbeat(): void {
    const nowMs = this.options.nowMs();
    for (const watched of this.#watched.values()) {
      if (nowMs - watched.lastFrameMs >= heartbeatMs) this.#frame(watched);
    }
  }

  #frame(watched: Watched): void {
    clearTimeout(watched.due);
    watched.due = undefined;
    const nowMs = this.options.nowMs();
    watched.lastFrameMs = nowMs;
    if (this.socket.bufferedAmount > maxBufferedBytes) {
      watched.dropped += 1;
      return;
    }
    const { feed } = this.options;
    const live = feed.live(watched.rigId);
    if (live === null) {
      this.#forget(watched);
      this.#send({ type: 'gone', rigId: watched.rigId });
      return;
    }
    const withHistory = watched.detail && nowMs - watched.lastHistoryMs >= historyEveryMs;
    if (withHistory) watched.lastHistoryMs = nowMs;
    this.#send({
      type: 'frame',
      rigId: watched.rigId,
      at: new Date(nowMs).toISOString(),
      live,
      ribbon: watched.ribbon === null ? null : feed.ribbon(watched.rigId, watched.ribbon),
      ...(watched.detail ? { wheelFace: feed.wheelFace(watched.rigId) } : {}),
      ...(withHistory ? { speedHistory: feed.speedHistory(watched.rigId) } : {}),
      dropped: watched.dropped,
    });
  }

  #problem(slug: string, detail: string): void {
    this.#send({
      type: 'problem',
      problem: { type: `urn:turnmark:problem:${slug}`, title: detail, status: 422 },
    });
  }

  #send(message: HubMessage): void {
    if (this.socket.readyState === this.socket.OPEN) this.socket.send(JSON.stringify(message));
  }

  #checkAlive(): void {
    if (!this.#alive) return this.socket.terminate();
    this.#alive = false;
    if (this.socket.readyState === this.socket.OPEN) this.socket.ping();
  }

  #forget(watched: Watched): void {
    clearTimeout(watched.due);
    watched.unwatch();
    this.#watched.delete(watched.rigId);
  }

  #dispose(): void {
    if (this.#closed) return;
    this.#closed = true;
    clearTimeout(this.#hello);
    clearTimeout(this.#expiry);
    clearInterval(this.#beat);
    clearInterval(this.#ping);
    for (const watched of [...this.#watched.values()]) this.#forget(watched);
    this.onClose(this);
  }
}
