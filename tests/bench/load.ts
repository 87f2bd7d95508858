/**
 * Load as a process of its own: reads an order from standard input, opens a WebSocket a rig and sends blocks, paced on
 * an absolute schedule or as fast as they are acked. Prints what came of it as JSON.
 */
import { setTimeout as sleep } from 'node:timers/promises';
import { decode } from 'cbor-x';
import WebSocket from 'ws';
import { blockTemplate, fill, type LoadShape } from '@/tests/bench/fast-block';
import { quantile } from '@/tests/bench/rounds';

export type LoadOrder = LoadShape & {
  url: string;
  keys: string[];
  seconds: number;
  pace: 'real-time' | 'flood';
  /** The receiver answers; else only the socket's own buffer holds the sender back. */
  hasAcks: boolean;
};
export type LoadResult = {
  /** Of all channels together. */
  samples: number;
  blocks: number;
  unacked: number;
  problems: number;
  closed: number;
  ackMs: { p50: number; p99: number; max: number };
  lateMs: number;
};

const window = 256;
const maxBufferedBytes = 256 * 1024;
const drainS = 5;

type Line = {
  socket: WebSocket;
  templates: ReturnType<typeof blockTemplate>[];
  seq: number;
  acked: number;
  sentMs: number[];
};

async function main(): Promise<void> {
  const parts: Buffer[] = [];
  for await (const part of process.stdin) parts.push(part as Buffer);
  const order = JSON.parse(Buffer.concat(parts).toString('utf8')) as LoadOrder;
  const result: LoadResult = {
    samples: 0,
    blocks: 0,
    unacked: 0,
    problems: 0,
    closed: 0,
    ackMs: { p50: NaN, p99: NaN, max: NaN },
    lateMs: 0,
  };
  const ackMs: number[] = [];
  const lines = await Promise.all(order.keys.map((key, i) => open(order, key, i, result, ackMs)));
  const beginMs = performance.now();
  await Promise.all(
    lines.map((line, i) => send(order, line, beginMs + (i / lines.length) * blockMs(order), result)),
  );
  const untilMs = performance.now() + drainS * 1000;
  const waits = () =>
    lines.some((line) => (order.hasAcks ? line.acked < line.seq : line.socket.bufferedAmount > 0));
  while (waits() && performance.now() < untilMs) await sleep(5);
  for (const line of lines) {
    if (order.hasAcks) result.unacked += line.seq - line.acked;
    line.socket.removeAllListeners('close');
    line.socket.close(1000);
  }
  if (order.hasAcks)
    result.ackMs = { p50: quantile(ackMs, 0.5), p99: quantile(ackMs, 0.99), max: quantile(ackMs, 1) };
  process.stdout.write(`${JSON.stringify(result)}\n`);
}

function blockMs(order: LoadOrder): number {
  return (1000 * order.blockSamples) / order.rateHz;
}

async function open(
  order: LoadOrder,
  key: string,
  i: number,
  result: LoadResult,
  ackMs: number[],
): Promise<Line> {
  const stream = `load-${process.pid}-${Date.now()}-${i}`;
  const templates = [0, 1, 2, 3, 4, 5, 6, 7].map((variant) => blockTemplate(order, stream, variant));
  const socket = new WebSocket(order.url, {
    headers: { Authorization: `Bearer ${key}` },
    perMessageDeflate: false,
  });
  const line: Line = { socket, templates, seq: 0, acked: 0, sentMs: [] };
  socket.on('message', (data: Buffer, isBinary: boolean) => {
    const answer = (isBinary ? decode(data) : JSON.parse(data.toString('utf8'))) as {
      ack?: { seq: number };
      problem?: unknown;
    };
    if (answer.problem !== undefined) result.problems += 1;
    const nowMs = performance.now();
    for (const upTo = answer.ack?.seq ?? -1; line.acked <= upTo; line.acked += 1) {
      ackMs.push(nowMs - (line.sentMs[line.acked] ?? NaN));
    }
  });
  socket.on('close', () => (result.closed += 1));
  await new Promise<void>((resolve, reject) => {
    socket.once('open', resolve);
    socket.once('error', reject);
  });
  return line;
}

async function send(order: LoadOrder, line: Line, beginMs: number, result: LoadResult): Promise<void> {
  const endMs = beginMs + order.seconds * 1000;
  for (;;) {
    const nowMs = performance.now();
    if (order.pace === 'real-time') {
      const dueMs = beginMs + line.seq * blockMs(order);
      if (dueMs >= endMs) return;
      if (dueMs > nowMs) await sleep(dueMs - nowMs);
      else result.lateMs = Math.max(result.lateMs, nowMs - dueMs);
    } else {
      if (nowMs >= endMs) return;
      const isFull = order.hasAcks && line.seq - line.acked >= window;
      if (isFull || line.socket.bufferedAmount > maxBufferedBytes) {
        await sleep(1);
        continue;
      }
      if (line.seq % 16 === 15) await new Promise((resolve) => setImmediate(resolve));
    }
    if (line.socket.readyState !== WebSocket.OPEN) return;
    const template = line.templates[line.seq % line.templates.length] as ReturnType<typeof blockTemplate>;
    line.sentMs[line.seq] = performance.now();
    line.socket.send(fill(template, line.seq, (line.seq * order.blockSamples) / order.rateHz));
    line.seq += 1;
    result.blocks += 1;
    result.samples += order.blockSamples * order.channels.length;
  }
}

await main();
