import { HttpErrorResponse } from '@angular/common/http';
import type { ProblemDetails } from '@tallystone/contracts/problems/schema';

type ProblemItem = ProblemDetails['problems'][number];

/**
 * An answer that did not succeed, as RFC 9457 problem details: a stable `code`, a message for people and every problem of the input
 * at once. Everything that reads or writes through HttpClient rejects with this type (see problemInterceptor).
 *
 * @example
 * catch (error) { if (error instanceof Problem && error.status === 412) this.showTheirsAndMine(); else throw error; }
 */
export class Problem extends Error {
  override readonly name = 'Problem';

  constructor(
    readonly status: number,
    readonly code: string,
    readonly title: string,
    readonly detail: string,
    readonly problems: readonly ProblemItem[] = [],
    /** Names this request in the server's log; shown wherever the problem is. */
    readonly requestId: string | null = null,
    readonly retryAfterSeconds: number | null = null,
    /** The whole body, for answers that carry more (the server's current state with a 412, for example). */
    readonly body: unknown = null,
  ) {
    super(detail || title);
  }

  /** The item whose `where.field` (or `where.path`) is this field, for messages beside a form control. */
  forField(field: string): ProblemItem | undefined {
    return this.problems.find((item) => item.where['field'] === field || item.where['path'] === field);
  }
}

/** What to say when the server gave no problem details: it was not reached, or something between it and here answered. */
const plain: Readonly<Record<number, { code: string; title: string; detail: string }>> = {
  0: {
    code: 'unreachable',
    title: 'The server cannot be reached',
    detail: 'Nothing was changed. Check the connection and try again.',
  },
  401: { code: 'signed-out', title: 'You are signed out', detail: 'Sign in again to go on.' },
  403: { code: 'forbidden', title: 'This is not open to you', detail: 'Ask an administrator if your work needs it.' },
  404: { code: 'not-found', title: 'Not found', detail: 'It does not exist, or it is not open to you.' },
  412: { code: 'stale', title: 'Someone changed this meanwhile', detail: 'Reload to see their change; yours was not saved.' },
  413: { code: 'too-large', title: 'Too large', detail: 'The server does not take a request of this size.' },
  429: { code: 'too-many', title: 'Too many attempts', detail: 'Wait a while, then try again.' },
  503: { code: 'unavailable', title: 'The service is not ready', detail: 'Nothing was changed. Try again in a few seconds.' },
};

function isProblemBody(body: unknown): body is Partial<ProblemDetails> {
  return typeof body === 'object' && body !== null && ('title' in body || 'code' in body || 'detail' in body);
}

/** Turns any failed answer into a Problem; text bodies and network failures included. */
export function problemFrom(response: HttpErrorResponse): Problem {
  let body: unknown = response.error;
  if (typeof body === 'string' && body.trimStart().startsWith('{')) {
    try {
      body = JSON.parse(body);
    } catch {
      body = null; // not JSON after all: fall through to the plain message for this status
    }
  }
  const fallback = plain[response.status] ?? {
    code: 'failed',
    title: 'That did not work',
    detail: `The server answered with status ${response.status}.`,
  };
  const given = isProblemBody(body) ? body : {};
  const retryAfter = Number(response.headers?.get('Retry-After') ?? Number.NaN);
  return new Problem(
    response.status,
    given.code ?? fallback.code,
    given.title ?? fallback.title,
    given.detail ?? (given.title === undefined ? fallback.detail : ''),
    Array.isArray(given.problems) ? given.problems : [],
    given.requestId ?? response.headers?.get('X-Request-Id') ?? null,
    Number.isFinite(retryAfter) ? retryAfter : null,
    body,
  );
}

/** Any thrown thing as a Problem, so that one problem list shows them all. */
export function asProblem(error: unknown): Problem {
  if (error instanceof Problem) return error;
  if (error instanceof HttpErrorResponse) return problemFrom(error);
  const message = error instanceof Error ? error.message : String(error);
  return new Problem(-1, 'unexpected', 'Something went wrong in this page', message);
}
