/**
 * The two WebSockets of the hub on one HTTP server, told apart by path. Who may not come in is answered in HTTP before
 * the upgrade; any other path is hung up.
 */
import type { IncomingMessage, Server } from 'node:http';
import type { Duplex } from 'node:stream';
import { WebSocketServer } from 'ws';
import type { WebSocket } from 'ws';
import type { VerifiedKey } from '@/server/auth/rig-keys';
import { bearerOf } from '@/server/auth/tokens';
import type { OriginCheck } from '@/server/http/origin';
import type { ProblemSlug } from '@/server/http/problems';
import { problemBody, problemKinds } from '@/server/http/problems';

const ingestPath = '/ingest/v1/stream';
const livePath = '/live/v1';
const ingestProtocol = 'turnmark.v1';
const bearerPrefix = 'bearer.';

const maxIngestMessageBytes = 1024 * 1024;
const maxLiveMessageBytes = 64 * 1024;

export type UpgradeOptions = {
  origin: OriginCheck;
  verifyRigKey(token: string | undefined, req: IncomingMessage): VerifiedKey;
  attachBoard(socket: WebSocket, key: { rigId: string; keyId: string }): void;
  attachViewer(socket: WebSocket): void;
};

const reasons: Partial<Record<number, string>> = { 401: 'Unauthorized', 403: 'Forbidden' };

function refuse(socket: Duplex, slug: ProblemSlug): void {
  const { status } = problemKinds[slug];
  const body = JSON.stringify(problemBody(slug));
  const head = [
    `HTTP/1.1 ${status} ${reasons[status] ?? 'Refused'}`,
    'Content-Type: application/problem+json',
    `Content-Length: ${Buffer.byteLength(body)}`,
    'Cache-Control: no-store',
    'Connection: close',
    ...(status === 401 ? ['WWW-Authenticate: Bearer'] : []),
  ];
  socket.end(`${head.join('\r\n')}\r\n\r\n${body}`);
}

/** The rig key: the header, or a subprotocol where the client cannot set headers. Never the URL. */
function rigKeyOf(req: IncomingMessage): string | undefined {
  const fromHeader = bearerOf(req.headers.authorization);
  if (fromHeader !== undefined) return fromHeader;
  const offered = (req.headers['sec-websocket-protocol'] ?? '').split(',').map((part) => part.trim());
  return offered.find((name) => name.startsWith(bearerPrefix))?.slice(bearerPrefix.length);
}

/** Returns what stops new sockets and ends the open ones that are left. */
export function acceptUpgrades(server: Server, options: UpgradeOptions): () => void {
  const common = { noServer: true, perMessageDeflate: false, clientTracking: true } as const;
  const boards = new WebSocketServer({
    ...common,
    maxPayload: maxIngestMessageBytes,
    handleProtocols: (offered) => (offered.has(ingestProtocol) ? ingestProtocol : false),
  });
  const viewers = new WebSocketServer({
    ...common,
    maxPayload: maxLiveMessageBytes,
    handleProtocols: () => false,
  });
  let open = true;

  server.on('upgrade', (req: IncomingMessage, socket: Duplex, head: Buffer) => {
    socket.on('error', () => socket.destroy());
    const path = (req.url ?? '').split('?')[0];
    if (!open || (path !== ingestPath && path !== livePath)) {
      socket.destroy();
      return;
    }
    if (path === livePath) {
      if (options.origin.isOwn(req) === false) return refuse(socket, 'foreign-origin');
      viewers.handleUpgrade(req, socket, head, (accepted) => options.attachViewer(accepted));
      return;
    }
    // A key is no cookie: a page cannot use one that it was not given, so any page may be a sender.
    const key = options.verifyRigKey(rigKeyOf(req), req);
    if (!key.ok) return refuse(socket, key.slug);
    boards.handleUpgrade(req, socket, head, (accepted) => options.attachBoard(accepted, key));
  });

  return () => {
    open = false;
    for (const socket of [...boards.clients, ...viewers.clients]) socket.terminate();
    boards.close();
    viewers.close();
  };
}
