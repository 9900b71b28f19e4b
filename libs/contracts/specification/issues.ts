import { z } from 'zod';
import type { SpecificationProblem } from './types';

/** Pieces from which the specification's schema is built, so that every problem is reported with its own place. */

/** A problem found by a check that spans several keys. */
export interface Finding {
  path: (string | number)[];
  code: string;
  message: string;
}

export type Report = (path: (string | number)[], code: string, message: string) => void;

/**
 * A schema that first looks which alternative is meant, then reports that alternative's problems. (A plain union reports
 * "invalid input" for the whole.)
 */
export function alternative<Out>(pick: (value: unknown) => z.ZodType<Out, unknown>): z.ZodType<Out, unknown> {
  return z.unknown().transform((value, context): Out => {
    const parsed = pick(value).safeParse(value);
    if (parsed.success) return parsed.data;
    for (const issue of parsed.error.issues) context.issues.push({ ...issue, input: value } as z.core.$ZodRawIssue);
    return z.NEVER;
  });
}

/** Adds a check of several keys of one object; it runs once the object's own keys are valid. */
export function checked<Out>(
  schema: z.ZodType<Out, unknown>,
  check: (value: Out, report: Report) => void,
): z.ZodType<Out, unknown> {
  return schema.superRefine((value, context) => {
    check(value, (path, code, message) => {
      context.addIssue({ code: 'custom', path, message, params: { code } });
    });
  });
}

export function has(value: unknown, key: string): boolean {
  return typeof value === 'object' && value !== null && Object.prototype.hasOwnProperty.call(value, key);
}

export function pathText(path: readonly PropertyKey[]): string {
  let text = '';
  for (const step of path) {
    if (typeof step === 'number') text += `[${step}]`;
    else text += text === '' ? String(step) : `.${String(step)}`;
  }
  return text;
}

/** One problem per unknown key, per issue otherwise. */
export function problemsOf(issues: readonly z.core.$ZodIssue[], prefix: readonly PropertyKey[]): SpecificationProblem[] {
  return issues.flatMap((issue): SpecificationProblem[] => {
    const path = [...prefix, ...issue.path];
    if (issue.code === 'unrecognized_keys') {
      return issue.keys.map((key) => ({
        code: 'unknown-key',
        message: `"${key}" is not a key of the format.`,
        where: { path: pathText([...path, key]) },
      }));
    }
    const code = issue.code === 'custom' && typeof issue.params?.['code'] === 'string' ? issue.params['code'] : codeOf(issue);
    return [{ code, message: sentence(issue.message), where: { path: pathText(path) } }];
  });
}

function codeOf(issue: z.core.$ZodIssue): string {
  if (issue.code === 'invalid_type') return issue.message.includes('received undefined') ? 'missing-key' : 'wrong-type';
  if (issue.code === 'too_small' || issue.code === 'too_big' || issue.code === 'not_multiple_of') return 'out-of-range';
  return 'invalid-value';
}

function sentence(message: string): string {
  return /[.?!]$/.test(message) ? message : `${message}.`;
}

/** The values that occur more than once. */
export function repeated<Value>(values: readonly Value[]): Value[] {
  const seen = new Set<Value>();
  const twice = new Set<Value>();
  for (const value of values) (seen.has(value) ? twice : seen).add(value);
  return [...twice];
}
