import { problem, problemPrefix, type Problem } from '@/server/contract';

export type FieldError = { pointer: string; detail: string };

type ProblemParts = {
  kind: ApiProblem['kind'];
  slug: string;
  status: number | null;
  title: string;
  detail: string;
  errors: FieldError[];
  retryAfterS: number | null;
};

/**
 * Why a call to the hub failed. `kind` says how: `offline` (no answer came), `refused` (the hub said no, see
 * `slug`), `broken` (the answer was not what the contract promises).
 */
export class ApiProblem extends Error {
  readonly kind: 'offline' | 'refused' | 'broken';
  /** Last part of the problem's `type`, e.g. `forbidden`; `offline` and `broken` where no problem came. */
  readonly slug: string;
  readonly status: number | null;
  readonly title: string;
  readonly detail: string;
  /** Fields at fault, as JSON pointers into the body that was sent. */
  readonly errors: FieldError[];
  readonly retryAfterS: number | null;

  constructor(parts: ProblemParts) {
    super(parts.detail || parts.title);
    this.name = 'ApiProblem';
    this.kind = parts.kind;
    this.slug = parts.slug;
    this.status = parts.status;
    this.title = parts.title;
    this.detail = parts.detail;
    this.errors = parts.errors;
    this.retryAfterS = parts.retryAfterS;
  }

  /** Worth another try without anyone changing anything. */
  get temporary(): boolean {
    return this.kind === 'offline' || (this.status !== null && this.status >= 500);
  }

  static offline(): ApiProblem {
    return new ApiProblem({
      kind: 'offline',
      slug: 'offline',
      status: null,
      title: 'The hub does not answer',
      detail: 'Check that this device is on the network of the hub, then try again.',
      errors: [],
      retryAfterS: null,
    });
  }

  static broken(status: number, what: string): ApiProblem {
    return new ApiProblem({
      kind: 'broken',
      slug: 'broken',
      status,
      title: 'The hub gave an answer that this page cannot read',
      detail: `${what} Load the page again; it may be older than the hub.`,
      errors: [],
      retryAfterS: null,
    });
  }

  /** From an answer with an error status. */
  static async fromResponse(response: Response): Promise<ApiProblem> {
    const read = problem.safeParse(await response.json().catch(() => null));
    const body: Problem | null = read.success ? read.data : null;
    const retryAfter = Number(response.headers.get('Retry-After') ?? Number.NaN);
    return new ApiProblem({
      kind: 'refused',
      slug: body ? slugOf(body.type) : slugByStatus(response.status),
      status: response.status,
      title: body?.title ?? `The hub answered ${response.status}`,
      detail: body?.detail ?? '',
      errors: body?.errors ?? [],
      retryAfterS: Number.isFinite(retryAfter) ? retryAfter : null,
    });
  }
}

/** The error as a problem; anything that is not one is a fault of ours and goes on as it is. */
export function asProblem(error: unknown): ApiProblem {
  if (error instanceof ApiProblem) return error;
  throw error;
}

function slugOf(type: string): string {
  return type.startsWith(problemPrefix) ? type.slice(problemPrefix.length) : type;
}

function slugByStatus(status: number): string {
  if (status === 401) return 'not-signed-in';
  if (status === 403) return 'forbidden';
  if (status === 404) return 'not-found';
  if (status === 429) return 'too-many-requests';
  return status >= 500 ? 'hub-failed' : 'refused';
}
