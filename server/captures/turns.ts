/** Long work on the event loop, cut into turns so that blocks and viewers get theirs. */
import { setImmediate as nextTurn } from 'node:timers/promises';

const turnMs = 8;

/** Call it between slices of work; it lets others run once the turn has lasted long enough. */
export function createTurns(): () => Promise<void> | undefined {
  let beganMs = performance.now();
  return () => {
    if (performance.now() - beganMs < turnMs) return undefined;
    return nextTurn().then(() => {
      beganMs = performance.now();
    });
  };
}

/** At most `running` jobs at once; at most `waiting` more are let in. */
export class WorkQueue {
  #running = 0;
  readonly #waiting: (() => void)[] = [];

  constructor(private readonly limits: { running: number; waiting: number }) {}

  get full(): boolean {
    return this.#running >= this.limits.running && this.#waiting.length >= this.limits.waiting;
  }

  async run<T>(work: () => Promise<T>): Promise<T> {
    if (this.#running >= this.limits.running) await new Promise<void>((go) => this.#waiting.push(go));
    else this.#running += 1;
    try {
      return await work();
    } finally {
      // The place is handed on, not given back, so that nobody can slip in between.
      const next = this.#waiting.shift();
      if (next) next();
      else this.#running -= 1;
    }
  }
}
