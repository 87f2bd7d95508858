/**
 * A route as a value: who may call it, what goes in, what comes out, and what it does. The server mounts these values,
 * the OpenAPI document is made of the same ones, so that a route without a role or without a description cannot exist.
 */
import type { Request, RequestHandler, Response } from 'express';
import type { z } from 'zod';
import type { Role } from '@/server/contract';
import type { SignedIn } from '@/server/auth/authenticate';
import type { ProblemSlug } from './problems';

export type Method = 'get' | 'post' | 'patch' | 'delete';

export type RouteAnswer = {
  status: number;
  description: string;
  schema?: z.ZodType;
  /** `application/json` unless said otherwise. */
  contentTypes?: string[];
};

/** What a handler gets: everything checked, nothing raw but where it asks for it. */
export type Call<P, Q, B> = { params: P; query: Q; body: B; user: SignedIn; req: Request; res: Response };

/** undefined: the handler has written the response itself. */
export type Answer = { status: number; body?: unknown; headers?: Record<string, string> } | undefined;

export type Route = {
  method: Method;
  /** Under `/api/v1`, parameters as `:name`. */
  path: string;
  /** `all`: no sign-in needed. */
  access: 'all' | Role;
  tag: string;
  summary: string;
  description?: string;
  params?: z.ZodType;
  query?: z.ZodType;
  /** JSON body; a route that reads its body itself says so with `rawBody`. */
  body?: z.ZodType;
  rawBody?: { contentType: string; schema: z.ZodType };
  /** The header must say JSON although there may be no body. */
  demandsJson?: boolean;
  /** Between the body and the handler. */
  before?: RequestHandler[];
  answers: RouteAnswer[];
  problems: ProblemSlug[];
  handle(call: Call<never, never, never>): Promise<Answer> | Answer;
};

type RouteDefinition<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType> = Omit<
  Route,
  'params' | 'query' | 'body' | 'handle'
> & {
  params?: P;
  query?: Q;
  body?: B;
  handle(call: Call<z.output<P>, z.output<Q>, z.output<B>>): Promise<Answer> | Answer;
};

/** Ties the handler's types to the schemas beside it. */
export function route<
  P extends z.ZodType = z.ZodUndefined,
  Q extends z.ZodType = z.ZodUndefined,
  B extends z.ZodType = z.ZodUndefined,
>(definition: RouteDefinition<P, Q, B>): Route {
  return definition as unknown as Route;
}
