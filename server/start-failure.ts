/** Why the hub could not start, in one sentence for the person who started it. */
import { DbOpenError } from '@/db/errors';
import { ConfigError } from './config/config';

/** undefined: a failure that nobody foresaw; its stack is what helps. */
export function startFailure(error: unknown): string | undefined {
  if (error instanceof ConfigError || error instanceof DbOpenError) return error.message;
  const { code, syscall, port, path } = error as NodeJS.ErrnoException & { port?: number };
  if (code === 'EADDRINUSE') {
    return `Port ${port} is in use: end the program that uses it, or choose another with PORT.`;
  }
  if (code === 'EACCES' && syscall === 'listen') {
    return `Port ${port} may not be opened by this account: choose one above 1023 with PORT.`;
  }
  if (code === 'EACCES' || code === 'EROFS' || code === 'EPERM')
    return `${path ?? 'A file'} cannot be written.`;
  if (code === 'ENOSPC') return 'The disk that holds the data folder is full.';
  return undefined;
}
