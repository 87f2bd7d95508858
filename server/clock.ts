/** Time as a value, so that a test can hold it still. */
export type Clock = {
  /** Wall clock, ms since 1970. */
  nowMs(): number;
};

export const systemClock: Clock = { nowMs: () => Date.now() };
