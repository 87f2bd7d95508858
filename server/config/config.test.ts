import { describe, expect, it } from 'vitest';
import { configFrom, ConfigError } from './config';
import type { Env } from './env';

const production: Env = {
  TURNMARK_MODE: 'production',
  TURNMARK_SECRET: 's'.repeat(43),
  TURNMARK_INGEST_SECRET: 'i'.repeat(43),
  TURNMARK_PUBLIC_URL: 'https://marks.example',
  TURNMARK_MAIL_URL: 'smtp://mail.example',
};

describe('configFrom', () => {
  it('needs nothing for the demo', () => {
    expect(configFrom({})).toMatchObject({
      mode: 'demo',
      port: 4680,
      durability: 'normal',
      lookbackS: 600,
      demoRigs: true,
      publicUrl: undefined,
      trustProxy: false,
    });
    expect(configFrom({ TURNMARK_DEMO_RIGS: '0' }).demoRigs).toBe(false);
  });

  it('takes a whole set for production', () => {
    expect(configFrom(production)).toMatchObject({ mode: 'production', secret: 's'.repeat(43) });
  });

  it.each(['TURNMARK_SECRET', 'TURNMARK_INGEST_SECRET', 'TURNMARK_PUBLIC_URL', 'TURNMARK_MAIL_URL'] as const)(
    'refuses production without %s, and names it',
    (name) => {
      expect(() => configFrom({ ...production, [name]: undefined })).toThrow(name);
    },
  );

  it.each<[keyof Env, string]>([
    ['PORT', '70000'],
    ['PORT', '4680a'],
    ['TURNMARK_MODE', 'prod'],
    ['TURNMARK_DURABILITY', 'high'],
    ['TURNMARK_LOOKBACK_S', '0'],
    ['TURNMARK_DEMO_RIGS', 'no'],
    ['TURNMARK_DEMO_PASSWORD', 'short'],
    ['TURNMARK_SECRET', 'short'],
    ['TURNMARK_PUBLIC_URL', 'marks.example'],
    ['TURNMARK_PUBLIC_URL', 'https://marks.example/below'],
    ['TURNMARK_PUBLIC_URL', 'https://me:pw@marks.example'],
    ['TURNMARK_TRUST_PROXY', 'true'],
    ['TURNMARK_TRUST_PROXY', '0.0.0.0/x'],
    ['TURNMARK_LOG_LEVEL', 'loud'],
  ])('refuses %s=%s in one sentence that names it', (name, value) => {
    const attempt = () => configFrom({ [name]: value });
    expect(attempt).toThrow(ConfigError);
    expect(attempt).toThrow(new RegExp(`^${name} .*\\.$`));
  });

  it('refuses one secret for both uses, and plain http in production', () => {
    expect(() => configFrom({ ...production, TURNMARK_INGEST_SECRET: production.TURNMARK_SECRET })).toThrow(
      'differ',
    );
    expect(() => configFrom({ ...production, TURNMARK_PUBLIC_URL: 'http://marks.example' })).toThrow('https');
  });

  it('trusts proxies by number or address, never everyone', () => {
    expect(configFrom({ TURNMARK_TRUST_PROXY: '1' }).trustProxy).toBe(1);
    expect(configFrom({ TURNMARK_TRUST_PROXY: 'loopback, 10.0.0.0/8' }).trustProxy).toEqual([
      'loopback',
      '10.0.0.0/8',
    ]);
  });
});
