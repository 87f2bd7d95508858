import type { z } from 'zod';
import { ApiProblem } from '@/client/data/api-problem';

/** The sliver of `fetch` that is used. */
export type Fetch = (url: string, init: RequestInit) => Promise<Response>;

export type QueryValue = string | number | undefined;

export type Call<S extends z.ZodType> = {
  method: 'GET' | 'POST' | 'PATCH' | 'DELETE';
  /** Below `/api/v1`, parts already encoded: `/rigs`. */
  path: string;
  query?: Record<string, QueryValue>;
  body?: unknown;
  /** What the answer must be; leave it out where there is no body. */
  answer?: S;
  signal?: AbortSignal;
};

/**
 * One request and its answer, checked against the contract.
 * Throws `ApiProblem`; an aborted request throws what `fetch` throws.
 */
export async function send<S extends z.ZodType>(
  fetch: Fetch,
  call: Call<S>,
  accessToken: string | null,
): Promise<z.output<S>> {
  // The hub demands JSON on every call that changes something, so that no other site's form can make one.
  const changes = call.method !== 'GET';
  const headers: Record<string, string> = { Accept: 'application/json' };
  if (accessToken !== null) headers.Authorization = `Bearer ${accessToken}`;
  if (changes) headers['Content-Type'] = 'application/json';

  let response: Response;
  try {
    response = await fetch(urlOf(call), {
      method: call.method,
      headers,
      credentials: 'same-origin',
      ...(changes && { body: JSON.stringify(call.body ?? {}) }),
      ...(call.signal && { signal: call.signal }),
    });
  } catch (error) {
    if (call.signal?.aborted) throw error;
    throw ApiProblem.offline();
  }
  if (!response.ok) throw await ApiProblem.fromResponse(response);
  if (!call.answer) return undefined as z.output<S>;

  const body: unknown = await response.json().catch(() => undefined);
  const read = call.answer.safeParse(body);
  if (read.success) return read.data;
  const issue = read.error.issues[0];
  throw ApiProblem.broken(
    response.status,
    `${call.path}: ${issue?.path.join('.') ?? ''} ${issue?.message ?? ''}.`,
  );
}

function urlOf(call: Call<z.ZodType>): string {
  const query = new URLSearchParams();
  for (const [name, value] of Object.entries(call.query ?? {})) {
    if (value !== undefined && value !== '') query.set(name, String(value));
  }
  const text = query.toString();
  return `/api/v1${call.path}${text ? `?${text}` : ''}`;
}
