import type { Result } from '@tallystone/contracts/result/types';

/** Comparison of two results, number by number. */

export interface Difference {
  /** Place in the result, such as `characteristics[3].bins[0].points`. */
  path: string;
  expected: unknown;
  actual: unknown;
  /** |expected - actual| where both are numbers. */
  difference: number | null;
}

export interface ComparisonOptions {
  /** Numbers a and b match if |a - b| <= tolerance x max(1, |a|), a the expected one. Whole numbers, texts and null must be equal. */
  tolerance: number;
  /** Places that are not compared, as the start of a path. */
  ignore?: readonly string[];
}

/** Replay by the same code. */
export const SAME_METHOD: ComparisonOptions = { tolerance: 1e-9 };
/** Replay by the second solver: its name and its own bookkeeping differ, integer points must not. */
export const OTHER_METHOD: ComparisonOptions = { tolerance: 1e-6, ignore: ['solver'] };

/**
 * Every place at which two results differ, in the order of the expected one.
 * @example compareResults(earlier, later, SAME_METHOD).map(describeDifference)
 */
export function compareResults(expected: Result, actual: Result, options: ComparisonOptions): Difference[] {
  const differences: Difference[] = [];
  compare(expected, actual, '', options, differences);
  return differences;
}

/** Counts the numbers of a result: what a comparison has compared. */
export function countNumbers(value: unknown): number {
  if (typeof value === 'number') return 1;
  if (typeof value !== 'object' || value === null) return 0;
  return Object.values(value).reduce<number>((sum, inner) => sum + countNumbers(inner), 0);
}

export function describeDifference({ path, expected, actual, difference }: Difference): string {
  const size = difference === null ? '' : ` (differs by ${difference.toExponential(3)})`;
  return `${path}: expected ${show(expected)}, got ${show(actual)}${size}`;
}

function compare(expected: unknown, actual: unknown, path: string, options: ComparisonOptions, differences: Difference[]): void {
  if (options.ignore?.some((start) => path === start || path.startsWith(`${start}.`)) === true) return;
  if (typeof expected === 'number' && typeof actual === 'number') {
    if (!matches(expected, actual, options.tolerance))
      differences.push({ path, expected, actual, difference: Math.abs(expected - actual) });
    return;
  }
  if (Array.isArray(expected) && Array.isArray(actual)) {
    if (expected.length !== actual.length) {
      differences.push({
        path: `${path}.length`,
        expected: expected.length,
        actual: actual.length,
        difference: Math.abs(expected.length - actual.length),
      });
    }
    const length = Math.min(expected.length, actual.length);
    for (let index = 0; index < length; index++)
      compare(expected[index], actual[index], `${path}[${index}]`, options, differences);
    return;
  }
  if (isRecord(expected) && isRecord(actual)) {
    for (const key of new Set([...Object.keys(expected), ...Object.keys(actual)])) {
      compare(expected[key], actual[key], path === '' ? key : `${path}.${key}`, options, differences);
    }
    return;
  }
  if (expected !== actual) differences.push({ path, expected, actual, difference: null });
}

function matches(expected: number, actual: number, tolerance: number): boolean {
  if (expected === actual) return true;
  if (Number.isInteger(expected) && Number.isInteger(actual)) return false;
  return Math.abs(expected - actual) <= tolerance * Math.max(1, Math.abs(expected));
}

function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

function show(value: unknown): string {
  if (value === undefined) return 'nothing';
  const text = JSON.stringify(value);
  return text.length > 60 ? `${text.slice(0, 60)}…` : text;
}
