/** Loggers: JSON lines, with everything that opens a door taken out. */
import { pino } from 'pino';
import type { DestinationStream, Logger } from 'pino';
import type { LogLevel } from './config/config';

/** Members that may hold a secret, at the top and one or two levels down. */
const secretMembers = [
  'authorization',
  'cookie',
  '["set-cookie"]',
  '["sec-websocket-protocol"]',
  'password',
  'accessToken',
  'refreshToken',
  'token',
  'key',
  'secret',
];

function redactPaths(): string[] {
  const at = (prefix: string, name: string) =>
    name.startsWith('[') ? `${prefix}${name}` : `${prefix}.${name}`;
  return secretMembers.flatMap((name) => [name, at('*', name), at('*.*', name), at('req.headers', name)]);
}

export function createLogger(level: LogLevel, destination?: DestinationStream): Logger {
  const options = {
    level,
    base: undefined,
    timestamp: pino.stdTimeFunctions.isoTime,
    redact: { paths: redactPaths(), censor: '(taken out)' },
  };
  return destination === undefined ? pino(options) : pino(options, destination);
}

export type { Logger } from 'pino';
