/** What signs tokens and opens the demo. Production takes it from the environment; the demo makes it once. */
import { randomBytes } from 'node:crypto';
import { chmodSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { z } from 'zod';
import type { ServerConfig } from './config';

export type Secrets = {
  session: string;
  ingest: string;
  /** Password of the demo's people; undefined in production. */
  demoPassword: string | undefined;
};

const stored = z.object({
  session: z.string().min(32),
  ingest: z.string().min(32),
  demoPassword: z.string().min(8),
});

/** 256 bits, as text that survives any shell. */
function freshSecret(): string {
  return randomBytes(32).toString('base64url');
}

/** Three groups of four letters and digits that are hard to mistake for each other: 59 bits. */
function freshPassword(): string {
  const letters = 'abcdefghjkmnpqrstuvwxyz23456789';
  const pick = () => {
    for (;;) {
      const byte = randomBytes(1)[0] ?? 255;
      if (byte < 248) return letters[byte % 31] ?? 'a';
    }
  };
  return [0, 1, 2].map(() => [0, 1, 2, 3].map(pick).join('')).join('-');
}

function freshSecrets(): z.infer<typeof stored> {
  return { session: freshSecret(), ingest: freshSecret(), demoPassword: freshPassword() };
}

/** Reads the demo's secrets from the data folder, or makes them. The file is its owner's only. */
function demoSecrets(dataDir: string): z.infer<typeof stored> {
  const path = join(dataDir, 'demo-secrets.json');
  try {
    const found = stored.safeParse(JSON.parse(readFileSync(path, 'utf8')));
    if (found.success) {
      chmodSync(path, 0o600);
      return found.data;
    }
  } catch (error) {
    if (!(error instanceof SyntaxError) && (error as NodeJS.ErrnoException).code !== 'ENOENT') throw error;
  }
  const made = freshSecrets();
  writeFileSync(path, `${JSON.stringify(made, null, 2)}\n`, { mode: 0o600 });
  chmodSync(path, 0o600);
  return made;
}

/** The data folder must exist; `:memory:` keeps nothing. */
export function secretsFor(config: ServerConfig): Secrets {
  if (config.mode === 'production') {
    if (config.secret === undefined || config.ingestSecret === undefined)
      throw new Error('production without secrets');
    return { session: config.secret, ingest: config.ingestSecret, demoPassword: undefined };
  }
  const kept = config.dataDir === ':memory:' ? freshSecrets() : demoSecrets(config.dataDir);
  return {
    session: config.secret ?? kept.session,
    ingest: config.ingestSecret ?? kept.ingest,
    demoPassword: config.demoPassword ?? kept.demoPassword,
  };
}
