/** Passwords are kept as argon2id (RFC 9106). An unknown person costs as much time as a known one. */
import { hash, verify } from '@node-rs/argon2';

/** 19 MiB, two passes, one lane: the package's own defaults, written down so that they cannot drift. */
const cost = { memoryCost: 19_456, timeCost: 2, parallelism: 1 };
/** Hashes at work at once; more wait, so that a burst of sign-ins cannot take the machine. */
const maxAtOnce = 2;

export type Passwords = {
  hash(password: string): Promise<string>;
  /** `stored` undefined: nobody of that name; the answer is false after the same work. */
  matches(stored: string | undefined, password: string): Promise<boolean>;
};

export function createPasswords(): Passwords {
  let running = 0;
  const waiting: (() => void)[] = [];
  // Made at once, so that the first unknown person costs no more than the next.
  const nobodysHash = hash('nobody has this password', cost);

  async function inTurn<T>(work: () => Promise<T>): Promise<T> {
    if (running >= maxAtOnce) await new Promise<void>((go) => waiting.push(go));
    else running += 1;
    try {
      return await work();
    } finally {
      const next = waiting.shift();
      if (next) next();
      else running -= 1;
    }
  }

  return {
    hash: (password) => inTurn(() => hash(password, cost)),
    async matches(stored, password) {
      const against = stored ?? (await nobodysHash);
      const same = await inTurn(() => verify(against, password));
      return stored !== undefined && same;
    },
  };
}
