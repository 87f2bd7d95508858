/**
 * Puts the blocks of one stream in order: drops duplicates, waits a while for what is missing, then declares it lost, and
 * says where each block starts on the stream's axis. Pure: the caller gives the time (any steady clock, in seconds).
 *
 * A block that is in order is passed on at once, within `offer`. One that came early is held until its turn; `keep` makes
 * what is held (a copy, where the samples are views on a message that will go away).
 *
 * After a restart: create with the last `snapshot`, then `offer` again, in any order, every stored block of the stream
 * whose `seq` is at or above the snapshot's `nextSeq`.
 */
import { blockLimits } from './block';
import type { IngestIssue } from './block';
import { invalid } from './decoders/result';
import { gapLength } from './gap-length';

/** What the assembler must know of a block; `Block` is one. */
export type BlockHead = {
  seq: number;
  rateHz: number | undefined;
  timeS: number | undefined;
  length: number;
  channels: { name: string }[];
};

export type Gap = {
  lostSamples: number;
  /** From the count of missing blocks, as no clock could tell. */
  estimated: boolean;
  /** Sample index at which the gap begins. */
  fromIndex: number;
  fromSeq: number;
  missingBlocks: number;
};

export type AssemblerEvents<B> = {
  /** The next block in order, and the index of its first sample: 0 at the stream's first, running on across gaps. */
  block(block: B, startIndex: number): void;
  gap(gap: Gap): void;
};

export type Verdict =
  { result: 'accepted' } | { result: 'duplicate' } | { result: 'refused'; issue: IngestIssue };

/** All that outlives a restart; plain JSON. */
export type AssemblerState = {
  firstSeq: number;
  nextSeq: number;
  nextIndex: number;
  rateHz: number;
  channels: string[];
  lastLength: number;
  /** The board's clock just after the last block in order. */
  endTimeS: number | null;
  /** Newest last: ranges (both ends included) that were declared lost. Older ones than kept are taken for duplicates. */
  lost: [number, number][];
};

export type Assembler<B extends BlockHead> = {
  /** Takes a block. Its channels are put into the stream's own order where they differ from it. */
  offer(block: B, nowS: number): Verdict;
  /** A block that was refused elsewhere: it will not come, so nothing waits for it. */
  refuse(seq: number): void;
  /** Lets time pass: declares lost what has been waited for long enough. */
  advance(nowS: number): void;
  /** When `advance` has something to do next, s; undefined while nothing is missing. */
  deadlineS(): number | undefined;
  /** Every block up to and including this one is held, refused or declared lost; undefined before the first. */
  ackSeq(): number | undefined;
  /** The number after the highest that was ever taken. */
  freshSeq(): number;
  rateHz(): number | undefined;
  /** undefined before the first block. */
  snapshot(): AssemblerState | undefined;
};

export const reorderWindow = { blocks: 64, waitS: 2 } as const;

const accepted: Verdict = Object.freeze({ result: 'accepted' });
const duplicate: Verdict = Object.freeze({ result: 'duplicate' });
const maxLostRanges = 256;
const maxRefused = 64;

export function createAssembler<B extends BlockHead>(options: {
  events: AssemblerEvents<B>;
  keep?: (block: B) => B;
  restored?: AssemblerState;
}): Assembler<B> {
  const { events, keep = (block: B) => block } = options;
  let state = options.restored && structuredClone(options.restored);
  const waiting = new Map<number, { block: B; arrivedS: number }>();
  /** Refused ones that do not follow on `refusedTo`. */
  const refused = new Set<number>();
  /** What is below this and not below `nextSeq` has been refused. */
  let refusedTo = 0;

  function offer(block: B, nowS: number): Verdict {
    if (state === undefined) {
      if (block.rateHz === undefined) return { result: 'refused', issue: rateMissing };
      state = startState(block, block.rateHz);
      pass(state, block);
      return accepted;
    }
    const { seq } = block;
    if (seq < state.nextSeq)
      return wasLost(state, seq) ? { result: 'refused', issue: tooLate(seq) } : duplicate;
    if (waiting.size > 0 && waiting.has(seq)) return duplicate;
    const changed = changeOf(state, block);
    if (changed !== undefined) {
      refuse(seq);
      return { result: 'refused', issue: changed };
    }
    if (seq === state.nextSeq) {
      pass(state, block);
      if (waiting.size > 0) settle(state);
    } else {
      waiting.set(seq, { block: keep(block), arrivedS: nowS });
      settle(state);
      if (waiting.size >= reorderWindow.blocks) giveUp(state);
    }
    return accepted;
  }

  function refuse(seq: number): void {
    if (state === undefined || waiting.has(seq)) return;
    const followsAt = Math.max(state.nextSeq, refusedTo);
    if (seq < followsAt) return;
    if (seq === followsAt) {
      refusedTo = seq + 1;
      while (refused.delete(refusedTo)) refusedTo++;
    } else if (refused.size < maxRefused) refused.add(seq);
    settle(state);
  }

  function advance(nowS: number): void {
    if (state === undefined) return;
    for (let due = deadlineS(); due !== undefined && nowS >= due; due = deadlineS()) giveUp(state);
  }

  function deadlineS(): number | undefined {
    let firstS = Infinity;
    for (const { arrivedS } of waiting.values()) if (arrivedS < firstS) firstS = arrivedS;
    return firstS === Infinity ? undefined : firstS + reorderWindow.waitS;
  }

  function ackSeq(): number | undefined {
    if (state === undefined) return undefined;
    let seq = Math.max(state.nextSeq, refusedTo);
    while (waiting.has(seq) || refused.has(seq)) seq++;
    return seq - 1;
  }

  /** Passes on what has become ready: next in order, or with nothing but refused blocks before it. */
  function settle(now: AssemblerState): void {
    while (waiting.size > 0) {
      const seq = firstWaiting();
      if (seq > now.nextSeq && refusedBefore(seq) < seq - now.nextSeq) return;
      passWaiting(now, seq);
    }
  }

  /** Declares lost what is missing before the first block that waits, and passes on what follows. */
  function giveUp(now: AssemblerState): void {
    passWaiting(now, firstWaiting());
    settle(now);
  }

  function passWaiting(now: AssemblerState, seq: number): void {
    const { block } = waiting.get(seq)!;
    waiting.delete(seq);
    if (seq > now.nextSeq) declareLost(now, block);
    pass(now, block);
  }

  function pass(now: AssemblerState, block: B): void {
    const startIndex = now.nextIndex;
    now.nextSeq = block.seq + 1;
    now.nextIndex = startIndex + block.length;
    now.lastLength = block.length;
    now.endTimeS = block.timeS === undefined ? null : block.timeS + block.length / now.rateHz;
    if (refused.size > 0) for (const seq of refused) if (seq < now.nextSeq) refused.delete(seq);
    events.block(block, startIndex);
  }

  function declareLost(now: AssemblerState, next: B): void {
    const missingBlocks = next.seq - now.nextSeq;
    const gap: Gap = {
      ...gapLength({
        endTimeS: now.endTimeS ?? undefined,
        nextTimeS: next.timeS,
        rateHz: now.rateHz,
        fromIndex: now.nextIndex,
        missingBlocks,
        lastLength: now.lastLength,
      }),
      fromIndex: now.nextIndex,
      fromSeq: now.nextSeq,
      missingBlocks,
    };
    now.lost.push([now.nextSeq, next.seq - 1]);
    if (now.lost.length > maxLostRanges) now.lost.shift();
    now.nextIndex += gap.lostSamples;
    now.nextSeq = next.seq;
    events.gap(gap);
  }

  function firstWaiting(): number {
    let first = Infinity;
    for (const seq of waiting.keys()) if (seq < first) first = seq;
    return first;
  }

  function refusedBefore(end: number): number {
    let count = state === undefined ? 0 : Math.max(0, Math.min(end, refusedTo) - state.nextSeq);
    for (const seq of refused) if (seq < end) count++;
    return count;
  }

  return {
    offer,
    refuse,
    advance,
    deadlineS,
    ackSeq,
    freshSeq: () => {
      let fresh = state?.nextSeq ?? 0;
      for (const seq of waiting.keys()) if (seq >= fresh) fresh = seq + 1;
      return fresh;
    },
    rateHz: () => state?.rateHz,
    snapshot: () => state && { ...state, channels: [...state.channels], lost: [...state.lost] },
  };
}

function startState(block: BlockHead, rateHz: number): AssemblerState {
  return {
    firstSeq: block.seq,
    nextSeq: block.seq,
    nextIndex: 0,
    rateHz,
    channels: block.channels.map((channel) => channel.name),
    lastLength: 0,
    endTimeS: null,
    lost: [],
  };
}

/** Whether a number below `nextSeq` was never held. */
function wasLost(state: AssemblerState, seq: number): boolean {
  if (seq < state.firstSeq) return true;
  for (let i = state.lost.length - 1; i >= 0; i--) {
    const [from, to] = state.lost[i]!;
    if (seq > to) return false;
    if (seq >= from) return true;
  }
  return false;
}

/** What differs from the stream's rate or channels; puts the channels into the stream's order where only that differs. */
function changeOf(state: AssemblerState, block: BlockHead): IngestIssue | undefined {
  const { rateHz, channels } = block;
  if (rateHz !== undefined && Math.abs(rateHz - state.rateHz) > 1e-9 * state.rateHz)
    return changed(`The stream began with ${state.rateHz} Hz; this block says ${rateHz} Hz.`, '/rate');
  let same = channels.length === state.channels.length;
  for (let i = 0; same && i < channels.length; i++) same = channels[i]!.name === state.channels[i];
  if (same) return undefined;
  const places = channels.map((channel) => state.channels.indexOf(channel.name));
  if (channels.length !== state.channels.length || places.includes(-1))
    return changed(`The stream began with the channels ${state.channels.join(', ')}.`, '/samples');
  channels.sort((a, b) => state.channels.indexOf(a.name) - state.channels.indexOf(b.name));
  return undefined;
}

function changed(detail: string, pointer: string): IngestIssue {
  return { slug: 'stream-changed', status: 422, detail, pointer, at: undefined };
}

function tooLate(seq: number): IngestIssue {
  const detail = `Block ${seq} was waited for and declared lost, or is older than the stream's first block.`;
  return { slug: 'too-late', status: 422, detail, pointer: '/seq', at: undefined };
}

const rateMissing = invalid(
  `The first block of a stream must carry its \`rate\`, from ${blockLimits.minRateHz} to ${blockLimits.maxRateHz} Hz.`,
  '/rate',
);
