/** Time behind an interface, so that tests bring their own. */
export type Clock = {
  nowMs: () => number;
  setTimeout: (run: () => void, afterMs: number) => unknown;
  /** Takes null too: nothing to clear. */
  clearTimeout: (timer: unknown) => void;
};

export const systemClock: Clock = {
  nowMs: () => Date.now(),
  setTimeout: (run, afterMs) => setTimeout(run, afterMs),
  clearTimeout: (timer) => {
    if (timer !== null) clearTimeout(timer as ReturnType<typeof setTimeout>);
  },
};
