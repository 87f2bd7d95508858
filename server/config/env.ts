/** The only file that reads the environment. Raw values as they stand; `config.ts` gives them a meaning. */

const envNames = [
  'PORT',
  'TURNMARK_MODE',
  'TURNMARK_DATA_DIR',
  'TURNMARK_DURABILITY',
  'TURNMARK_LOOKBACK_S',
  'TURNMARK_DEMO_RIGS',
  'TURNMARK_DEMO_PASSWORD',
  'TURNMARK_SECRET',
  'TURNMARK_INGEST_SECRET',
  'TURNMARK_PUBLIC_URL',
  'TURNMARK_TRUST_PROXY',
  'TURNMARK_MAIL_URL',
  'TURNMARK_LOG_LEVEL',
] as const;

export type Env = Partial<Record<(typeof envNames)[number], string>>;

/** Variables that are set and not empty. */
export function readEnv(): Env {
  const env: Env = {};
  for (const name of envNames) {
    const value = process.env[name]?.trim();
    if (value) env[name] = value;
  }
  return env;
}
