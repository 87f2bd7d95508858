/** Every problem that the API answers with: slug, status and wording, in one place (RFC 9457). */
import type { z } from 'zod';
import type { Problem } from '@/server/contract';
import { problemPrefix } from '@/server/contract';

export const problemKinds = {
  unreadable: { status: 400, title: 'The request cannot be read' },
  'not-signed-in': { status: 401, title: 'Sign in first' },
  'no-key': { status: 401, title: 'A rig key is needed' },
  forbidden: { status: 403, title: 'Your role does not allow this' },
  'foreign-origin': { status: 403, title: 'This page may not use the hub' },
  'key-revoked': { status: 403, title: 'This rig key was revoked' },
  'not-found': { status: 404, title: 'There is nothing here' },
  'method-not-allowed': { status: 405, title: 'This address does not take that method' },
  conflict: { status: 409, title: 'This does not go with what is stored' },
  'nothing-to-keep': { status: 409, title: 'There is nothing to keep' },
  'too-large': { status: 413, title: 'This is too large' },
  'content-type': { status: 415, title: 'The hub does not take this type of content' },
  invalid: { status: 422, title: 'Some of this is not valid' },
  'cannot-export': { status: 422, title: 'This format cannot hold the capture' },
  'too-many-requests': { status: 429, title: 'Too many requests' },
  internal: { status: 500, title: 'The hub failed at this' },
  unavailable: { status: 503, title: 'The hub cannot do this now' },
} as const satisfies Record<string, { status: number; title: string }>;
export type ProblemSlug = keyof typeof problemKinds;

export type FieldError = { pointer: string; detail: string };

type ProblemOptions = {
  detail?: string;
  errors?: FieldError[];
  headers?: Record<string, string>;
  /** Extension members. */
  more?: Record<string, unknown>;
};

/** Thrown by a route; the error handler answers it. */
export class ApiProblem extends Error {
  readonly slug: ProblemSlug;
  readonly options: ProblemOptions;

  constructor(slug: ProblemSlug, options: ProblemOptions = {}) {
    super(`${slug}: ${options.detail ?? problemKinds[slug].title}`);
    this.slug = slug;
    this.options = options;
  }

  get status(): number {
    return problemKinds[this.slug].status;
  }

  body(): Problem {
    return problemBody(this.slug, this.options);
  }
}

export function problemBody(slug: ProblemSlug, options: ProblemOptions = {}): Problem {
  const { status, title } = problemKinds[slug];
  return {
    type: `${problemPrefix}${slug}`,
    title,
    status,
    ...(options.detail === undefined ? {} : { detail: options.detail }),
    ...(options.errors === undefined ? {} : { errors: options.errors }),
    ...options.more,
  };
}

/** RFC 6901. */
export function pointerOf(path: readonly PropertyKey[]): string {
  return path.map((part) => `/${String(part).replaceAll('~', '~0').replaceAll('/', '~1')}`).join('');
}

/** Members by which a union tells its choices apart: where one is wrong, that choice was not meant. */
const choiceMembers: ReadonlySet<PropertyKey> = new Set(['kind', 'mode', 'type']);

type Reason = { path: PropertyKey[]; detail: string; code: string };

/** How far from what was meant a choice is: a wrong type of the whole is furthest, then a wrong `kind`. */
function distance(reasons: readonly Reason[], depth: number): number {
  return reasons.reduce((sum, { path }) => {
    if (choiceMembers.has(path.at(-1) ?? '')) return sum + 1000;
    return sum + (path.length <= depth ? 10_000 : 1);
  }, 0);
}

/** The deepest reason of each issue: of a union, what the choice that was meant found wrong. */
function reasonsOf(issue: z.core.$ZodIssue, base: readonly PropertyKey[]): Reason[] {
  const path = [...base, ...issue.path];
  if (issue.code !== 'invalid_union' || issue.errors.length === 0) {
    return [{ path, detail: issue.message, code: issue.code }];
  }
  const choices = issue.errors.map((issues) => issues.flatMap((inner) => reasonsOf(inner, path)));
  const values = issue.errors.flatMap(([only]) =>
    only?.code === 'invalid_value' ? only.values.map(String) : [],
  );
  const literals = issue.errors.every((issues) => issues.length === 1 && issues[0]?.path.length === 0);
  if (literals && values.length === issue.errors.length) {
    return [{ path, detail: `must be one of ${values.join(', ')}`, code: 'invalid_value' }];
  }
  const [nearest] = choices.sort((a, b) => distance(a, path.length) - distance(b, path.length));
  return nearest ?? [{ path, detail: issue.message, code: issue.code }];
}

export function fieldErrors(error: z.ZodError, base: readonly PropertyKey[] = []): FieldError[] {
  return error.issues
    .flatMap((issue) => reasonsOf(issue, base))
    .map(({ path, detail }) => ({ pointer: pointerOf(path), detail }));
}

export function invalid(error: z.ZodError): ApiProblem {
  const errors = fieldErrors(error);
  const first = errors[0];
  return new ApiProblem('invalid', {
    detail: first === undefined ? undefined : `${first.pointer || 'The request'}: ${first.detail}`,
    errors,
  });
}

export function invalidField(pointer: string, detail: string): ApiProblem {
  return new ApiProblem('invalid', { detail: `${pointer}: ${detail}`, errors: [{ pointer, detail }] });
}
