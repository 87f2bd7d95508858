/** Gives the environment its meaning: defaults, checks, and errors that name the variable. */
import { resolve } from 'node:path';
import type { Env } from './env';

export type Mode = 'demo' | 'production';
export type LogLevel = 'fatal' | 'error' | 'warn' | 'info' | 'debug' | 'trace' | 'silent';

export type ServerConfig = {
  mode: Mode;
  /** 0: any free port. */
  port: number;
  dataDir: string;
  durability: 'normal' | 'full';
  lookbackS: number;
  demoRigs: boolean;
  /** undefined: one is made at the first start and kept beside the demo's secrets. */
  demoPassword: string | undefined;
  /** Signs access tokens and refresh tokens. undefined in the demo only. */
  secret: string | undefined;
  /** Signs rig keys. undefined in the demo only. */
  ingestSecret: string | undefined;
  /** Where people reach the hub; undefined in the demo unless given. */
  publicUrl: URL | undefined;
  /** What Express calls `trust proxy`: hops, or the proxies' addresses. Never simply everyone. */
  trustProxy: number | string[] | false;
  mailUrl: string | undefined;
  logLevel: LogLevel;
};

/** Something in the environment is wrong; the message is one sentence that names the variable. */
export class ConfigError extends Error {}

const minSecretChars = 32;

function wholeNumber(env: Env, name: keyof Env, fallback: number, min: number, max: number): number {
  const text = env[name];
  if (text === undefined) return fallback;
  const value = Number(text);
  if (!/^\d+$/.test(text) || value < min || value > max) {
    throw new ConfigError(`${name} must be a whole number from ${min} to ${max}, not "${text}".`);
  }
  return value;
}

function oneOf<T extends string>(env: Env, name: keyof Env, choices: readonly T[], fallback: T): T {
  const text = env[name];
  if (text === undefined) return fallback;
  const found = choices.find((choice) => choice === text);
  if (found === undefined)
    throw new ConfigError(`${name} must be one of ${choices.join(', ')}, not "${text}".`);
  return found;
}

function secretOf(
  env: Env,
  name: 'TURNMARK_SECRET' | 'TURNMARK_INGEST_SECRET',
  mode: Mode,
): string | undefined {
  const text = env[name];
  if (text === undefined) {
    if (mode === 'demo') return undefined;
    throw new ConfigError(
      `${name} is needed in production: set it to at least ${minSecretChars} random characters.`,
    );
  }
  if (text.length < minSecretChars)
    throw new ConfigError(`${name} must have at least ${minSecretChars} characters.`);
  return text;
}

function publicUrlOf(env: Env): URL | undefined {
  const text = env.TURNMARK_PUBLIC_URL;
  if (text === undefined) return undefined;
  const url = URL.canParse(text) ? new URL(text) : undefined;
  if (
    url === undefined ||
    !/^https?:$/.test(url.protocol) ||
    url.pathname !== '/' ||
    url.search ||
    url.hash
  ) {
    throw new ConfigError(
      `TURNMARK_PUBLIC_URL must be an http or https address without a path, not "${text}".`,
    );
  }
  if (url.username || url.password)
    throw new ConfigError('TURNMARK_PUBLIC_URL must not hold a name or a password.');
  return url;
}

function trustProxyOf(env: Env): ServerConfig['trustProxy'] {
  const text = env.TURNMARK_TRUST_PROXY;
  if (text === undefined || text === '0' || text === 'false') return false;
  if (/^[1-9]$/.test(text)) return Number(text);
  const addresses = text.split(',').map((part) => part.trim());
  if (
    !addresses.every(
      (a) => /^(loopback|linklocal|uniquelocal|[\da-fA-F.:]+(\/\d{1,3})?)$/.test(a) && a !== 'true',
    )
  ) {
    throw new ConfigError(
      `TURNMARK_TRUST_PROXY must be the number of proxies (1 to 9) or their addresses, separated by commas, not "${text}".`,
    );
  }
  return addresses;
}

/** Throws `ConfigError`. */
export function configFrom(env: Env): ServerConfig {
  const mode = oneOf(env, 'TURNMARK_MODE', ['demo', 'production'] as const, 'demo');
  const secret = secretOf(env, 'TURNMARK_SECRET', mode);
  const ingestSecret = secretOf(env, 'TURNMARK_INGEST_SECRET', mode);
  if (secret !== undefined && secret === ingestSecret) {
    throw new ConfigError('TURNMARK_INGEST_SECRET must differ from TURNMARK_SECRET.');
  }
  const publicUrl = publicUrlOf(env);
  if (mode === 'production') {
    if (publicUrl === undefined) throw new ConfigError('TURNMARK_PUBLIC_URL is needed in production.');
    if (publicUrl.protocol !== 'https:')
      throw new ConfigError('TURNMARK_PUBLIC_URL must be https in production.');
    if (env.TURNMARK_MAIL_URL === undefined)
      throw new ConfigError('TURNMARK_MAIL_URL is needed in production.');
  }
  const demoPassword = env.TURNMARK_DEMO_PASSWORD;
  if (demoPassword !== undefined && (demoPassword.length < 8 || demoPassword.length > 256)) {
    throw new ConfigError('TURNMARK_DEMO_PASSWORD must have 8 to 256 characters.');
  }
  return {
    mode,
    port: wholeNumber(env, 'PORT', 4680, 0, 65_535),
    dataDir: resolve(env.TURNMARK_DATA_DIR ?? './data'),
    durability: oneOf(env, 'TURNMARK_DURABILITY', ['normal', 'full'] as const, 'normal'),
    lookbackS: wholeNumber(env, 'TURNMARK_LOOKBACK_S', 600, 10, 86_400),
    demoRigs: oneOf(env, 'TURNMARK_DEMO_RIGS', ['0', '1'] as const, '1') === '1',
    demoPassword,
    secret,
    ingestSecret,
    publicUrl,
    trustProxy: trustProxyOf(env),
    mailUrl: env.TURNMARK_MAIL_URL,
    logLevel: oneOf(
      env,
      'TURNMARK_LOG_LEVEL',
      ['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent'] as const,
      // The demo's terminal shows its sign-ins; a line for each request would push them away.
      mode === 'demo' ? 'warn' : 'info',
    ),
  };
}
