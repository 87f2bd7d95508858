/** Mounts route values on an Express router: role first, then the body, then its check, then the handler. */
import express, { Router } from 'express';
import type { Request, RequestHandler } from 'express';
import type { z } from 'zod';
import type { Authenticate, SignedIn } from '@/server/auth/authenticate';
import { nobody } from '@/server/auth/authenticate';
import type { Call, Route } from './route';
import { ApiProblem, invalid } from './problems';

/** Longest JSON body of the API: a rig with eight channels has 3 KiB. */
const maxJsonBytes = 256 * 1024;
const readJson = express.json({ limit: maxJsonBytes, strict: false });

const checked = new WeakMap<Request, SignedIn>();

function guard(route: Route, authenticate: Authenticate): RequestHandler {
  return async (req, _res, next) => {
    if (route.access !== 'all') checked.set(req, await authenticate(req, route.access));
    next();
  };
}

const demandJson: RequestHandler = (req, _res, next) => {
  const [type] = (req.headers['content-type'] ?? '').split(';');
  if (type?.trim().toLowerCase() !== 'application/json') {
    throw new ApiProblem('content-type', { detail: 'Content-Type must be application/json.' });
  }
  next();
};

function parse(schema: z.ZodType | undefined, value: unknown): unknown {
  if (schema === undefined) return undefined;
  const result = schema.safeParse(value);
  if (!result.success) throw invalid(result.error);
  return result.data;
}

function handlerOf(route: Route): RequestHandler {
  return async (req, res) => {
    const call = {
      params: parse(route.params, req.params),
      query: parse(route.query, req.query),
      body: parse(route.body, req.body),
      user: checked.get(req) ?? nobody,
      req,
      res,
    };
    const answer = await route.handle(call as Call<never, never, never>);
    if (answer === undefined || res.headersSent) return;
    res.status(answer.status).set(answer.headers ?? {});
    if (answer.body === undefined) res.end();
    else res.json(answer.body);
  };
}

export function mountRoutes(routes: readonly Route[], authenticate: Authenticate): Router {
  const router = Router({ caseSensitive: true });
  for (const route of routes) {
    const steps = [guard(route, authenticate)];
    if (route.body !== undefined || route.demandsJson) steps.push(demandJson, readJson);
    router[route.method](route.path, ...steps, ...(route.before ?? []), handlerOf(route));
  }
  for (const path of new Set(routes.map((r) => r.path))) {
    const allowed = routes.filter((r) => r.path === path).map((r) => r.method.toUpperCase());
    router.all(path, () => {
      throw new ApiProblem('method-not-allowed', { headers: { Allow: allowed.join(', ') } });
    });
  }
  return router;
}
