/**
 * Group commits: what has arrived goes to the spool a few rows at a time, so that neither an ack waits long nor the
 * event loop stands still (one transaction of every rig's rows plus a checkpoint blocks it for tens of milliseconds).
 */
import { StorageUnavailableError } from '@/db/errors';
import type { Spool, SpoolBatch } from '@/db/spool-types';

/** What one transaction will write, while it is being gathered. */
export type CommitBatch = { -readonly [K in keyof SpoolBatch]: SpoolBatch[K][number][] };

export interface CommitSource {
  /** Adds what waits to the batch; called once before `committed` or `failed`. */
  collect(batch: CommitBatch): void;
  /** What was collected is on disk. */
  committed(): void;
  /** Nothing of it is; it will be collected again, unless the spool will never take it. */
  failed(detail: string, never?: boolean): void;
}

/** Rows of one transaction: many more make one commit block the event loop, fewer make too many commits. */
const rowsPerCommit = 8;
/** Blocks of one arrival share a commit even when it need not wait, ms. */
const soonMs = 3;

const unknownFailure = 'The spool cannot store.';

function emptyBatch(): CommitBatch {
  return { segments: [], early: [], releasedEarly: [], gaps: [], streams: [] };
}

export type CommitterOptions = {
  spool: Spool;
  /** Commits follow each other no closer than this, ms: the longest wait of a block. */
  intervalMs: number;
  /** Wait before a failed commit is tried again, ms. */
  retryMs: number;
  onFailure(error: unknown): void;
};

export class Committer {
  readonly #dirty = new Set<CommitSource>();
  #timer: ReturnType<typeof setTimeout> | undefined;
  #next: ReturnType<typeof setImmediate> | undefined;
  #failing: string | null = null;
  #lastMs = 0;

  constructor(private readonly options: CommitterOptions) {}

  /** Why the spool cannot store now, else null. New blocks are turned away meanwhile; those taken are kept and retried. */
  get failing(): string | null {
    return this.#failing;
  }

  markDirty(source: CommitSource): void {
    this.#dirty.add(source);
    if (this.#failing !== null) return;
    // The first block after a pause is not made to wait for others that may not come.
    const sinceLastMs = performance.now() - this.#lastMs;
    this.#schedule(Math.max(soonMs, this.options.intervalMs - sinceLastMs));
  }

  /** What waits of this source is of no use any more. */
  forget(source: CommitSource): void {
    this.#dirty.delete(source);
  }

  #schedule(delayMs: number): void {
    this.#timer ??= setTimeout(() => {
      this.#timer = undefined;
      this.#round();
    }, delayMs);
  }

  #round(): void {
    if (this.#next !== undefined) {
      clearImmediate(this.#next);
      this.#next = undefined;
    }
    if (!this.#commitSome()) {
      this.#schedule(this.options.retryMs);
      return;
    }
    if (this.#dirty.size > 0) this.#next = setImmediate(() => this.#round());
  }

  /** Commits everything that waits, now. Throws `StorageUnavailableError` where the spool cannot store. */
  flush(): void {
    while (this.#dirty.size > 0) {
      if (!this.#commitSome()) throw new StorageUnavailableError('io', this.#failing ?? unknownFailure);
    }
  }

  #commitSome(): boolean {
    const batch = emptyBatch();
    const taken: CommitSource[] = [];
    for (const source of this.#dirty) {
      if (batch.segments.length + batch.early.length >= rowsPerCommit) break;
      taken.push(source);
      this.#dirty.delete(source);
      source.collect(batch);
    }
    if (taken.length === 0) return true;
    try {
      this.options.spool.commit(batch);
    } catch (error) {
      // Not the disk: something in these rows. It must not keep the other streams from being stored.
      if (!(error instanceof StorageUnavailableError)) {
        this.options.onFailure(error);
        for (const source of taken) this.#commitAlone(source);
        return true;
      }
      this.#failing = error instanceof Error ? error.message : String(error);
      for (const source of taken) {
        this.#dirty.add(source);
        source.failed(this.#failing);
      }
      this.options.onFailure(error);
      return false;
    }
    this.#failing = null;
    this.#lastMs = performance.now();
    for (const source of taken) source.committed();
    return true;
  }

  /** A source whose rows the spool refuses is set aside: who waits is told, and its next block begins from what is stored. */
  #commitAlone(source: CommitSource): void {
    const batch = emptyBatch();
    source.collect(batch);
    try {
      this.options.spool.commit(batch);
    } catch (error) {
      this.options.onFailure(error);
      const passing = error instanceof StorageUnavailableError;
      source.failed(unknownFailure, !passing);
      if (passing) this.markDirty(source);
      else this.#dirty.delete(source);
      return;
    }
    source.committed();
  }

  close(): void {
    clearTimeout(this.#timer);
    if (this.#next !== undefined) clearImmediate(this.#next);
  }
}
