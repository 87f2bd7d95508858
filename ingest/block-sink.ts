/**
 * Where a transport hands its blocks in. The hub implements it; transports, the bridge and the tests call it. One
 * callback for each connection or request, not one promise for each block: this is the hot path.
 */
import type { Block, IngestIssue } from './block';

export type BlockOutcome =
  | { result: 'accepted' }
  | { result: 'duplicate' }
  /** Will never be taken as it is: the sender need not send it again. */
  | { result: 'refused'; issue: IngestIssue }
  /** The spool cannot store now: nothing was taken, sending again later is right. */
  | { result: 'unavailable'; detail: string };

/** Shared, so that the usual outcome costs no object. */
export const acceptedOutcome: BlockOutcome = Object.freeze({ result: 'accepted' });
export const duplicateOutcome: BlockOutcome = Object.freeze({ result: 'duplicate' });

/**
 * Called once for each offered block, after the commit that holds it (or at once where nothing is to be stored; it
 * may then run before `offer` returns). `token` is the caller's own, given back as it came.
 */
export type OutcomeCallback = (outcome: BlockOutcome, stream: string, seq: number, token: number) => void;

/** What the hub knows of a stream before a block of it is offered. */
export type StreamInfo = { rateHz: number };

export type BlockSink = {
  /**
   * Takes a block for its rig. The sample arrays may be views on the received message: they are good until `offer`
   * returns and must be copied to be kept. The sink checks what needs the rig or the stream: known channels, rate
   * and channels as before, order, duplicates, too late.
   */
  offer(rigId: string, block: Block, token: number, done: OutcomeCallback): void;

  /**
   * Says that a block was refused before it could be offered (a decoder found it invalid). The ack position may then
   * pass over it, and the live path need not wait for it. Ignored for a stream of which nothing is held.
   */
  refuse(rigId: string, stream: string, seq: number): void;

  /**
   * The number N such that every block of the stream up to and including N is stored (committed), refused or declared
   * lost; undefined while there is none.
   */
  ackPosition(rigId: string, stream: string): number | undefined;

  /**
   * Calls `moved` with the stream's name whenever the ack position of one of the rig's streams has moved, also where
   * no block came (a loss was declared). Returns what ends the watching.
   */
  watchAcks(rigId: string, moved: (stream: string) => void): () => void;

  /** What is known of a stream; undefined where the hub has never held a block of it. */
  streamInfo(rigId: string, stream: string): StreamInfo | undefined;

  /**
   * Sets aside `count` consecutive sequence numbers of a stream that follow every number seen or set aside so far, and
   * returns the first (0 for a new stream). For bodies that carry none of their own.
   */
  reserveSeqs(rigId: string, stream: string, count: number): number;
};
