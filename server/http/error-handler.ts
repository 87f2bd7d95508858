/** The one place where an error becomes an answer. Nothing of an unknown error leaves the hub. */
import type { ErrorRequestHandler, Request, Response } from 'express';
import { StorageUnavailableError } from '@/db/errors';
import type { Logger } from '@/server/logger';
import { ApiProblem } from './problems';

export function sendProblem(res: Response, problem: ApiProblem): void {
  res.status(problem.status).set(problem.options.headers ?? {});
  res.type('application/problem+json').send(JSON.stringify(problem.body()));
}

/** What body parsers and the router throw carries a status; its message is for developers only. */
function knownProblem(error: unknown): ApiProblem | undefined {
  if (error instanceof ApiProblem) return error;
  if (error instanceof StorageUnavailableError) {
    return new ApiProblem('unavailable', { detail: error.message, headers: { 'Retry-After': '5' } });
  }
  const { status, type } = error as { status?: unknown; type?: unknown };
  if (status === 413) return new ApiProblem('too-large');
  if (status === 415)
    return new ApiProblem('content-type', { detail: 'This character set or encoding is not taken.' });
  if (type === 'entity.parse.failed')
    return new ApiProblem('unreadable', { detail: 'The body is not valid JSON.' });
  if (typeof status === 'number' && status >= 400 && status < 500) return new ApiProblem('unreadable');
  return undefined;
}

export function errorHandler(log: Logger): ErrorRequestHandler {
  // Express knows an error handler by its four parameters.
  return (error: unknown, req: Request, res: Response, _next) => {
    if (req.destroyed && (error as { code?: unknown }).code === 'ERR_STREAM_PREMATURE_CLOSE') {
      log.debug({ path: req.path }, 'the reader went away');
      return;
    }
    const known = knownProblem(error);
    if (known === undefined || known.status >= 500)
      log.error({ err: error, method: req.method, path: req.path }, 'request failed');
    if (res.headersSent) {
      res.destroy();
      return;
    }
    sendProblem(
      res,
      known ?? new ApiProblem('internal', { detail: 'The failure was logged. Nothing more is known here.' }),
    );
  };
}
