import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';

const titles: Readonly<Record<number, string>> = {
  400: 'Malformed request',
  401: 'Signed out',
  403: 'Not allowed',
  404: 'Not found',
  409: 'Conflict',
  412: 'Changed meanwhile',
  413: 'Too large',
  415: 'Not a kind of file that is read here',
  422: 'Not valid',
  428: 'Entity tag missing',
  429: 'Too many',
  500: 'Fault',
  503: 'Not available',
  507: 'No space left',
};

export interface ProblemOptions {
  readonly problems?: readonly ProblemItem[];
  readonly headers?: Readonly<Record<string, string>>;
}

/**
 * What a service or a route throws when it cannot do what was asked: becomes RFC 9457 problem details. `detail` is read by people and says
 * what, where and what next.
 *
 * @example
 * throw new Problem(409, 'last-admin', 'This is the last admin. Make another person admin first.');
 */
export class Problem extends Error {
  readonly title: string;
  readonly problems: readonly ProblemItem[];
  readonly headers: Readonly<Record<string, string>>;

  constructor(
    readonly status: number,
    readonly code: string,
    readonly detail: string,
    options: ProblemOptions = {},
  ) {
    super(detail);
    this.name = 'Problem';
    this.title = titles[status] ?? 'Problem';
    this.problems = options.problems ?? [];
    this.headers = options.headers ?? {};
  }
}

/** The one answer for what is not there and for what one may not see. */
export const notFound = (): Problem =>
  new Problem(404, problemCodes.notFound, 'There is nothing here, or nothing that you may see.');

export const conflict = (code: string, detail: string, problems: readonly ProblemItem[] = []): Problem =>
  new Problem(409, code, detail, { problems });

/** Every problem of an input at once; never the first alone. */
export const invalid = (problems: readonly ProblemItem[]): Problem =>
  new Problem(
    422,
    problemCodes.invalid,
    problems.length === 1 ? problems[0].message : `${problems.length} things are not valid.`,
    { problems },
  );

/** One field that is not valid. */
export const invalidField = (field: string, code: string, message: string): Problem =>
  invalid([{ code, message, where: { field } }]);
