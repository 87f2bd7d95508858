import { z } from 'zod';

/** What this browser remembers. Nothing here is secret and nothing is worth a server's row. */
const preferences = z.object({
  scheme: z.enum(['system', 'steel', 'dye']).default('system'),
  keepSeconds: z.number().positive().max(3600).default(20),
  cautionSeen: z.boolean().default(false),
});
export type Preferences = z.output<typeof preferences>;

const storageKey = 'turnmark.preferences';
const listeners = new Set<() => void>();
let current: Preferences | null = null;

/** Loads once; whatever cannot be read falls back to the defaults. */
export function readPreferences(): Preferences {
  current ??= load();
  return current;
}

export function changePreferences(change: Partial<Preferences>): void {
  current = { ...readPreferences(), ...change };
  try {
    globalThis.localStorage?.setItem(storageKey, JSON.stringify(current));
  } catch {
    // A browser that refuses storage still gets the change until the page is left.
  }
  listeners.forEach((tell) => tell());
}

export function onPreferences(tell: () => void): () => void {
  listeners.add(tell);
  return () => listeners.delete(tell);
}

function load(): Preferences {
  try {
    return preferences.parse(JSON.parse(globalThis.localStorage?.getItem(storageKey) ?? '{}'));
  } catch {
    return preferences.parse({});
  }
}
