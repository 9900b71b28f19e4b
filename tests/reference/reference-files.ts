import { expect } from 'vitest';
import { unreadFiguresOf } from './reference-data';

export { Table, expected } from './reference-data';

/**
 * The last check of a file: every figure (number, true, false, null) of it has been read by a check before this one, but for those that are named
 * here with the reason. A name is a path, in which * stands for one step and ** for any number of them.
 */
export function expectAllRead(name: string, but: Readonly<Record<string, string>> = {}): void {
  const left = unreadFiguresOf(name);
  const named = Object.keys(but).map((path) => ({
    path,
    pattern: new RegExp(
      `^${path
        .split('/')
        .map((step) => (step === '**' ? '.+' : step === '*' ? '[^/]+' : step.replace(/[.+]/g, '\\$&')))
        .join('/')}$`,
    ),
  }));
  const surprising = left.filter((path) => !named.some(({ pattern }) => pattern.test(path)));
  // Paths alike but for their numbers are shown once.
  const shown = [...new Set(surprising.map((path) => path.replace(/(^|\/)\d+(?=\/|$)/g, '$1#')))];
  expect(shown, `figures of ${name} that nothing checks`).toEqual([]);
  expect(
    named.filter(({ pattern }) => !left.some((path) => pattern.test(path))).map(({ path }) => path),
    `named as unchecked in ${name}, but checked or gone`,
  ).toEqual([]);
}

/** |actual - expected| <= tolerance, with both numbers in the message. */
export function expectNear(actual: number, wanted: number, tolerance: number, what = ''): void {
  expect(Math.abs(actual - wanted), `${what} ${actual} against ${wanted}`).toBeLessThanOrEqual(tolerance);
}

/** A printed figure: half a unit of its last digit. */
export function expectPrinted(actual: number, printed: number, digits: number, what = ''): void {
  expectNear(actual, printed, 0.5 * 10 ** -digits + 1e-9, what);
}
