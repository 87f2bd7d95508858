/** A clock for tests: time passes only when nothing else is left to do, straight to the next sleeper. */
import type { Clock } from '@/simulator/clock';

export type FakeClock = Clock & {
  /** Runs on until `untilMs`, waking sleepers in order. */
  runUntil(untilMs: number): Promise<void>;
};

/** `lateMs` is added to each wake-up, as a busy machine does. */
export function createFakeClock(lateMs: () => number = () => 0): FakeClock {
  let nowMs = 0;
  let sleepers: { atMs: number; wake: () => void }[] = [];
  return {
    nowMs: () => nowMs,
    sleep: (ms, signal) =>
      new Promise((resolve) => {
        if (signal.aborted) return resolve();
        const wake = () => {
          signal.removeEventListener('abort', wake);
          sleepers = sleepers.filter((sleeper) => sleeper.wake !== wake);
          resolve();
        };
        sleepers.push({ atMs: nowMs + Math.max(0, ms) + lateMs(), wake });
        signal.addEventListener('abort', wake, { once: true });
      }),
    async runUntil(untilMs) {
      for (;;) {
        await settle();
        sleepers.sort((a, b) => a.atMs - b.atMs);
        const next = sleepers[0];
        if (!next || next.atMs > untilMs) break;
        nowMs = Math.max(nowMs, next.atMs);
        next.wake();
      }
      nowMs = untilMs;
    },
  };
}

/** Lets everything that can go on without time go on. */
function settle(): Promise<void> {
  return new Promise((resolve) => setImmediate(resolve));
}
