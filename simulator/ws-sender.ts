/** Sends an outbox over a WebSocket: one message a block, acks come back merged, what is not acked goes again. */
import { decode } from 'cbor-x';
import WebSocket from 'ws';
import { backOffMs } from '@/simulator/clock';
import { createSignalFlag, type Sender, type SenderOptions } from '@/simulator/sender';

/** The little of a socket that is needed. */
export type Socket = {
  send(data: Uint8Array | string): void;
  close(): void;
  readonly bufferedAmount: number;
};
export type SocketEvents = {
  onOpen(): void;
  onMessage(data: string | Uint8Array): void;
  /** `status`: the HTTP answer where the upgrade was refused. */
  onClose(code: number, status: number | undefined, detail: string): void;
};
export type Connect = (url: string, key: string, events: SocketEvents) => Socket;

export const connectByWs: Connect = (url, key, events) => {
  const socket = new WebSocket(url, {
    headers: { Authorization: `Bearer ${key}` },
    perMessageDeflate: false,
  });
  let status: number | undefined;
  socket.on('open', events.onOpen);
  socket.on('message', (data: Buffer, isBinary: boolean) =>
    events.onMessage(isBinary ? data : data.toString('utf8')),
  );
  socket.on('unexpected-response', (request, response) => {
    status = response.statusCode;
    response.resume();
    request.destroy();
  });
  let detail = '';
  // Every error is followed by close, which says what to do.
  socket.on('error', (error: Error & { code?: string }) => {
    detail = error.message || (error.code ?? '');
  });
  socket.on('close', (code: number) => events.onClose(code, status, detail));
  return {
    send: (data) => socket.send(data),
    close: () => (socket.readyState === WebSocket.CONNECTING ? socket.terminate() : socket.close(1000)),
    get bufferedAmount() {
      return socket.bufferedAmount;
    },
  };
};

const maxBufferedBytes = 1024 * 1024;
const maxFlushWaitMs = 50;

export function createWsSender(options: SenderOptions, connect: Connect = connectByWs): Sender {
  const { outbox, clock, random, onEvent } = options;
  const url = new URL('/ingest/v1/stream', options.baseUrl.replace(/^http/, 'ws')).href;
  const quiet = createSignalFlag();
  const stopping = new AbortController();
  let socket: Socket | undefined;
  let isOpen = false;
  let failures = 0;
  let endedBecause: string | undefined;
  let closed: (() => void) | undefined;
  let flushing = false;

  function flush(): void {
    if (flushing) return;
    while (socket && isOpen && outbox.unsent > 0) {
      if (socket.bufferedAmount > maxBufferedBytes) {
        flushing = true;
        void clock.sleep(maxFlushWaitMs, stopping.signal).then(() => {
          flushing = false;
          if (!stopping.signal.aborted) flush();
        });
        return;
      }
      for (const block of outbox.take(1, Infinity)) {
        socket.send(options.format === 'json' ? Buffer.from(block.bytes).toString('utf8') : block.bytes);
      }
    }
  }

  function onMessage(data: string | Uint8Array): void {
    const message = read(data);
    if (message?.ack) {
      failures = 0;
      outbox.ack(message.ack.stream, message.ack.seq);
      onEvent({ kind: 'acked', stream: message.ack.stream, seq: message.ack.seq });
      if (outbox.waiting === 0) quiet.raise();
    }
    if (message?.problem)
      onEvent({ kind: 'refused', detail: String(message.problem.detail ?? message.problem.title) });
  }

  async function run(): Promise<void> {
    while (!stopping.signal.aborted && endedBecause === undefined) {
      const reason = await onceConnected();
      if (stopping.signal.aborted || endedBecause !== undefined) break;
      const afterMs = backOffMs((failures += 1), random);
      onEvent({ kind: 'retry', afterMs, reason });
      await clock.sleep(afterMs, stopping.signal);
    }
    quiet.raise();
  }

  function onceConnected(): Promise<string> {
    return new Promise((resolve) => {
      let over = false;
      const finish = (reason: string) => {
        if (over) return;
        over = true;
        isOpen = false;
        socket = undefined;
        outbox.rewind();
        resolve(reason);
      };
      closed = () => finish('stopped');
      socket = connect(url, options.key, {
        onOpen: () => {
          if (over) return;
          isOpen = true;
          onEvent({ kind: 'connected' });
          flush();
        },
        onMessage: (data) => (over ? undefined : onMessage(data)),
        onClose: (code, status, detail) => {
          if (status === 401 || status === 403 || code === 4403) {
            endedBecause = `the hub refused the rig key (${status ?? code})`;
            onEvent({ kind: 'ended', reason: endedBecause });
          }
          finish(
            status === undefined ? detail || `the connection closed (${code})` : `the hub answered ${status}`,
          );
        },
      });
    });
  }

  const running = run();
  return {
    wake: flush,
    async drained(signal) {
      while (outbox.waiting > 0 && endedBecause === undefined && !signal.aborted) await quiet.wait(signal);
    },
    async stop() {
      stopping.abort();
      socket?.close();
      closed?.();
      await running;
    },
    get endedBecause() {
      return endedBecause;
    },
  };
}

type Answer = { ack?: { stream: string; seq: number }; problem?: { detail?: unknown; title?: unknown } };

function read(data: string | Uint8Array): Answer | undefined {
  try {
    return (typeof data === 'string' ? JSON.parse(data) : decode(data)) as Answer;
  } catch {
    return undefined;
  }
}
