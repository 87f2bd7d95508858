/**
 * One connection of `GET /ingest/v1/stream`, without the socket library: messages in, acks and problems out. The caller
 * has checked the rig key, and lets the socket itself refuse messages above `blockLimits.maxMessageBytes`.
 */
import { Encoder } from 'cbor-x';
import { blockLimits } from '../block';
import type { BlockOutcome, BlockSink, OutcomeCallback } from '../block-sink';
import { decodeCbor } from '../decoders/cbor';
import { decodeJson } from '../decoders/json';
import type { MessageResult } from '../decoders/result';
import { problem, problemOf } from './problem';
import type { Problem } from './problem';

/** What a session needs of a socket; one of the package `ws` fits after a line or two. */
export type SessionSocket = {
  send(data: string | Uint8Array): void;
  /** Bytes given to `send` that have not left yet. */
  bufferedBytes(): number;
  ping(): void;
  /** Stops, and starts again, reading from the sender. */
  pause(): void;
  resume(): void;
  close(code: number, reason: string): void;
};

export type SessionTimers = {
  /** Any steady clock, ms. */
  nowMs(): number;
  /** Returns what cancels it. */
  after(delayMs: number, run: () => void): () => void;
};

export type StreamSession = {
  message(data: Uint8Array, isBinary: boolean): void;
  pong(): void;
  /** The socket has closed, whoever closed it. */
  closed(): void;
  keyRevoked(): void;
  hubStopping(): void;
};

const closeCodes = { keyRevoked: 4403, silent: 4408, tooLarge: 1009, tryLater: 1013 } as const;

/** Acks are merged for this long after a commit, so that they come well within 250 ms of the block. */
const ackDelayMs = 100;
const pingEveryMs = 20_000;
const silentAfterMs = 60_000;
const drainCheckMs = 50;
const maxTrackedStreams = 256;

export function createStreamSession(parts: {
  rigId: string;
  sink: BlockSink;
  socket: SessionSocket;
  timers: SessionTimers;
  /** Of messages whose blocks are not stored yet; reading stops above it. */
  maxBytesInFlight?: number;
  /** Of answers that the sender does not take; reading stops above it. */
  maxBytesUnsent?: number;
}): StreamSession {
  const { rigId, sink, socket, timers } = parts;
  const { maxBytesInFlight = 4 * 1024 * 1024, maxBytesUnsent = 256 * 1024 } = parts;
  /** Last position told, for each stream that came over this connection. */
  const told = new Map<string, number>();
  const toTell = new Set<string>();
  let binary = true;
  let open = true;
  let paused = false;
  let bytesInFlight = 0;
  let lastSignMs = timers.nowMs();
  let lastPingMs = lastSignMs;
  let cancelAck: (() => void) | undefined;
  let cancelDrain: (() => void) | undefined;
  let cancelPing = timers.after(pingEveryMs, watchSilence);
  const unwatch = sink.watchAcks(rigId, (stream) => {
    if (told.has(stream)) tellSoon(stream);
  });

  function message(data: Uint8Array, isBinary: boolean): void {
    if (!open) return;
    binary = isBinary;
    if (data.byteLength > blockLimits.maxMessageBytes)
      return shut(closeCodes.tooLarge, 'A message has at most 1 MiB.');
    take(isBinary ? decodeCbor(data) : decodeJson(data), data.byteLength);
    if (bytesInFlight > maxBytesInFlight || socket.bufferedBytes() > maxBytesUnsent) pause();
  }

  function take(read: MessageResult, bytes: number): void {
    if (!read.ok) return sendProblem(problemOf(read.issue));
    const { blocks } = read;
    lastSignMs = timers.nowMs();
    bytesInFlight += bytes;
    const share = Math.floor(bytes / blocks.length);
    let token = bytes - share * (blocks.length - 1);
    for (const result of blocks) {
      if (result.ok) {
        track(result.block.stream);
        sink.offer(rigId, result.block, token, done);
      } else {
        bytesInFlight -= token;
        const { stream, seq, issue } = result;
        if (stream !== undefined && seq !== undefined) {
          sink.refuse(rigId, stream, seq);
          tellSoon(stream);
        }
        sendProblem(problemOf(issue, stream, seq));
      }
      token = share;
    }
  }

  const done: OutcomeCallback = (outcome: BlockOutcome, stream, seq, token) => {
    bytesInFlight -= token;
    if (!open) return;
    if (outcome.result === 'unavailable') {
      sendProblem({ ...problem('spool-unavailable', 503, outcome.detail), stream, seq });
      // The sender sends again what was not acked after a reconnect, and only then.
      return shut(closeCodes.tryLater, 'The hub cannot store samples now: reconnect later.');
    }
    if (outcome.result === 'refused') sendProblem(problemOf(outcome.issue, stream, seq));
    if (outcome.result === 'duplicate') told.delete(stream);
    tellSoon(stream);
    if (paused) resumeIfRoom();
  };

  function track(stream: string): void {
    if (told.has(stream)) return;
    if (told.size >= maxTrackedStreams) told.delete(told.keys().next().value!);
    told.set(stream, -1);
  }

  function tellSoon(stream: string): void {
    if (!open) return;
    toTell.add(stream);
    cancelAck ??= timers.after(ackDelayMs, sendAcks);
  }

  function sendAcks(): void {
    cancelAck = undefined;
    for (const stream of toTell) {
      const seq = sink.ackPosition(rigId, stream);
      if (seq === undefined || told.get(stream) === seq) continue;
      track(stream);
      told.set(stream, seq);
      send({ ack: { stream, seq } });
    }
    toTell.clear();
  }

  function sendProblem(body: Problem): void {
    send({ problem: body });
  }

  function send(body: object): void {
    if (open) socket.send(binary ? encoder.encode(body) : JSON.stringify(body));
  }

  function pause(): void {
    if (paused || !open) return;
    paused = true;
    socket.pause();
    cancelDrain = timers.after(drainCheckMs, checkDrain);
  }

  /** Nothing tells that sent bytes have left, so it is looked at now and then while paused. */
  function checkDrain(): void {
    cancelDrain = undefined;
    resumeIfRoom();
    if (paused) cancelDrain = timers.after(drainCheckMs, checkDrain);
  }

  function resumeIfRoom(): void {
    if (bytesInFlight > maxBytesInFlight / 2 || socket.bufferedBytes() > maxBytesUnsent / 2) return;
    paused = false;
    cancelDrain?.();
    cancelDrain = undefined;
    lastSignMs = timers.nowMs();
    socket.resume();
  }

  function watchSilence(): void {
    const nowMs = timers.nowMs();
    // While the hub itself does not read, a pong cannot come through.
    if (paused) lastSignMs = nowMs;
    if (nowMs - lastSignMs >= silentAfterMs)
      return shut(closeCodes.silent, 'Neither a block nor a pong for 60 s.');
    if (nowMs - lastPingMs >= pingEveryMs) {
      lastPingMs = nowMs;
      socket.ping();
    }
    const nextMs = Math.min(lastPingMs + pingEveryMs, lastSignMs + silentAfterMs);
    cancelPing = timers.after(Math.max(1, nextMs - nowMs), watchSilence);
  }

  function shut(code: number, reason: string): void {
    if (!open) return;
    sendAcks();
    socket.close(code, reason);
    closed();
  }

  function closed(): void {
    if (!open) return;
    open = false;
    unwatch();
    cancelPing();
    cancelAck?.();
    cancelDrain?.();
    // A paused socket would never see the other side's close.
    if (paused) socket.resume();
  }

  return {
    message,
    pong: () => {
      lastSignMs = timers.nowMs();
    },
    closed,
    keyRevoked: () => shut(closeCodes.keyRevoked, 'The rig key was revoked.'),
    hubStopping: () => shut(closeCodes.tryLater, 'The hub is stopping: reconnect later.'),
  };
}

const encoder = new Encoder({ useRecords: false, variableMapSize: true });
