/** Time as a thing that can be given: the machine's, or a test's. */
export type Clock = {
  /** Milliseconds on an axis that never goes back. */
  nowMs(): number;
  /** Resolves after so long, or at once when the signal is aborted; never rejects. */
  sleep(ms: number, signal: AbortSignal): Promise<void>;
};

export const machineClock: Clock = {
  nowMs: () => performance.now(),
  sleep: (ms, signal) =>
    new Promise((resolve) => {
      if (signal.aborted) return resolve();
      const done = () => {
        clearTimeout(timer);
        signal.removeEventListener('abort', done);
        resolve();
      };
      const timer = setTimeout(done, Math.max(0, ms));
      signal.addEventListener('abort', done, { once: true });
    }),
};

/** Full-jitter back-off: anything between a quarter and all of min(capMs, baseMs 2^attempt). */
export function backOffMs(attempt: number, random: () => number, baseMs = 250, capMs = 10_000): number {
  const ceiling = Math.min(capMs, baseMs * 2 ** Math.min(attempt, 16));
  return ceiling * (0.25 + 0.75 * random());
}
