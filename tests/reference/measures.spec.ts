import { describe, expect, it } from 'vitest';
import { Generator } from '@tallystone/numeric';
import { draw } from './check/measures-draw';
import { compare, ownFigures } from './check/measures-own';
import { expectAllRead, expected } from './reference-files';

interface Measures {
  readonly source: string;
  readonly seed: number;
  readonly r: Record<string, number[]>;
  readonly python: Record<string, number[]>;
}

// Source: expected/measures.json: R 4.2.2, pROC 1.18.0, scikit-learn 1.2.1 and SciPy 1.10.1 from Debian 12 by check/measures.R and check/measures.py,
// put together by generators/measures.ts. `npm run check:reference` makes the same comparison on new data each time.
const file = expected<Measures>('measures.json');
const drawn = draw(new Generator(file.seed, 1000));
const own = ownFigures(drawn);

describe.each(['r', 'python'] as const)('metrics, intervals, tests and distributions against %s', (program) => {
  const answers = new Map(Object.entries(file[program]).map(([key, values]) => [key, [...values]]));
  it.each(compare(drawn, own, answers))('$title ($key)', ({ difference, tolerance }) => {
    expect(difference).toBeLessThanOrEqual(tolerance);
  });
});

it('leaves no figure of its own without an answer', () => {
  const answered = new Set([...Object.keys(file.r), ...Object.keys(file.python)]);
  expect(Object.keys(own).filter((key) => !answered.has(key))).toEqual([]);
});

it('reads every figure of the file', () => expectAllRead('measures.json'));
