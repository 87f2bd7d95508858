/** Where boards send: one request, or a WebSocket. The rig key is checked before a byte of the body is read. */
import express, { Router } from 'express';
import type { Request, Response } from 'express';
import type { WebSocket } from 'ws';
import { bodyLimit } from '@/ingest/transports/http';
import type { HttpIngest } from '@/ingest/transports/http';
import type { IngestResponse } from '@/ingest/transports/http-types';
import { problem } from '@/ingest/transports/problem';
import { createStreamSession } from '@/ingest/transports/websocket';
import type { SessionTimers, StreamSession } from '@/ingest/transports/websocket';
import type { BlockSink } from '@/ingest/block-sink';
import type { VerifiedKey } from '@/server/auth/rig-keys';
import { bearerOf } from '@/server/auth/tokens';
import { createReadingRoom } from '@/server/reading-room';

export type IngestRouterDeps = {
  http: HttpIngest;
  verifyRigKey(token: string | undefined, req: Request): VerifiedKey;
};

const keyAnswers: Record<'no-key' | 'key-revoked', IngestResponse> = {
  'no-key': {
    status: 401,
    headers: { 'content-type': 'application/problem+json', 'www-authenticate': 'Bearer' },
    body: problem('no-key', 401, 'Send the rig key as "Authorization: Bearer KEY".'),
  },
  'key-revoked': {
    status: 403,
    headers: { 'content-type': 'application/problem+json' },
    body: problem('key-revoked', 403, 'This key was revoked. Make a new one on the rig’s Connect page.'),
  },
};

function send(res: Response, answer: IngestResponse): void {
  res.status(answer.status).set(answer.headers).send(JSON.stringify(answer.body));
}

/** An answer before the body is read: the rest of it is not worth the wait. */
function sendEarly(res: Response, answer: IngestResponse): void {
  res.set('Connection', 'close');
  send(res, answer);
}

export function ingestRouter({ http, verifyRigKey }: IngestRouterDeps): Router {
  const room = createReadingRoom();

  function read(req: Request, res: Response, limit: number): Promise<Uint8Array> {
    const readBody = express.raw({ type: () => true, limit, inflate: false });
    return new Promise((resolve, reject) => {
      readBody(req, res, (error: unknown) => {
        if (error) reject(error);
        else resolve(req.body instanceof Uint8Array ? req.body : new Uint8Array(0));
      });
    });
  }

  const router = Router();
  router.post('/samples', async (req, res) => {
    const key = verifyRigKey(bearerOf(req.headers.authorization), req);
    if (!key.ok) return sendEarly(res, keyAnswers[key.slug]);
    const contentType = req.headers['content-type'];
    const limit = bodyLimit(contentType);
    const declared = Number(req.headers['content-length'] ?? limit);
    const early = http.refuseEarly(key.rigId, contentType, declared);
    if (early !== undefined) return sendEarly(res, early);
    const leave = room.enter(key.rigId, declared);
    if (leave === undefined) {
      const detail = 'The hub is still reading what was sent before. Send this again a little later.';
      const headers = { 'content-type': 'application/problem+json', 'retry-after': '1' };
      return sendEarly(res, { status: 429, headers, body: problem('too-fast', 429, detail) });
    }
    let body: Uint8Array;
    try {
      body = await read(req, res, limit);
    } finally {
      leave();
    }
    send(
      res,
      await http.handle({ rigId: key.rigId, headers: req.headers, codes: req.query.codes === '1', body }),
    );
  });
  return router;
}

const timers: SessionTimers = {
  nowMs: () => performance.now(),
  after(delayMs, run) {
    const timer = setTimeout(run, delayMs);
    return () => clearTimeout(timer);
  },
};

export type Boards = {
  attach(socket: WebSocket, key: { rigId: string; keyId: string }): void;
  /** Tells every board to reconnect later. */
  stop(): void;
};

export function createBoards(
  hub: BlockSink & { watchKey(keyId: string, close: () => void): () => void },
): Boards {
  const sessions = new Set<StreamSession>();
  return {
    attach(socket, { rigId, keyId }) {
      const session = createStreamSession({
        rigId,
        sink: hub,
        timers,
        socket: {
          send: (data) => socket.send(data),
          bufferedBytes: () => socket.bufferedAmount,
          ping: () => socket.ping(),
          pause: () => socket.pause(),
          resume: () => socket.resume(),
          close: (code, reason) => socket.close(code, reason),
        },
      });
      sessions.add(session);
      const unwatch = hub.watchKey(keyId, () => session.keyRevoked());
      socket.on('message', (data, isBinary) => session.message(data as Buffer, isBinary));
      socket.on('pong', () => session.pong());
      socket.on('error', () => socket.terminate());
      socket.on('close', () => {
        unwatch();
        sessions.delete(session);
        session.closed();
      });
    },
    stop() {
      for (const session of [...sessions]) session.hubStopping();
    },
  };
}
