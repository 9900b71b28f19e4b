import { readFileSync, readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import * as engine from './engine/index';
import * as numeric from './index';
import { randomProblem } from './testing/problems';

/** Every docstring right above an exported function or class, by its name. */
const docstrings = new Map<string, string>();
for (const file of readdirSync(new URL('.', import.meta.url), { recursive: true, encoding: 'utf8' })) {
  if (!file.endsWith('.ts') || file.endsWith('.spec.ts') || file.startsWith('bench')) continue;
  const text = readFileSync(new URL(file, import.meta.url), 'utf8');
  for (const [, comment, name] of text.matchAll(/\/\*\*((?:(?!\*\/)[\s\S])*)\*\/\nexport (?:function|class) (\w+)/g))
    docstrings.set(name, comment);
}

const publicFunctions = Object.entries({ ...numeric, ...engine } as Record<string, unknown>)
  .filter(([, value]) => typeof value === 'function')
  .map(([name]) => name);
/** Their examples speak of other threads, or of an engine that somebody holds. */
const ofThreads = ['Alone', 'Team', 'Engine', 'help', 'helpFolds'];

/** What the examples speak of without saying how it came to be. */
const problem = randomProblem(3, 120, 3, { mixing: 1, standardize: true });
const fit = numeric.fitAt(problem, 0.02);
const scope: Record<string, unknown> = {
  ...numeric,
  ...engine,
  problem,
  fit,
  columns: problem.columns,
  outcome: problem.outcome,
  a: problem.columns[0],
  b: problem.columns[1],
  path: { fits: [fit] },
  folds: Uint8Array.from(problem.outcome, (_, i) => (i % 4) + 1),
  pd: numeric.probabilitiesOfBad(numeric.linearPredictor(problem.columns, fit.intercept, fit.coefficients)),
  draws: numeric.resampleFits(problem, 0.02, { seed: 1, count: 5 }),
  constraints: { smallestShare: 0.05, smallestGoods: 1, smallestBads: 1, mostBins: 5, smallestDifference: 0, trend: 'any' },
};
/** `summarise` takes results by fold where `crossValidate` takes the fold of each row. */
const scopeOf = (name: string): Record<string, unknown> =>
  name === 'summarise' ? { ...scope, folds: [1, 2].map((fold) => ({ fold, weight: 1, deviance: [1.2, 1.1] })) } : scope;

function numbersIn(value: unknown): number[] {
  if (typeof value === 'number') return [value];
  if (ArrayBuffer.isView(value)) return Array.from(value as Float64Array);
  if (typeof value === 'object' && value !== null) return Object.values(value).flatMap(numbersIn);
  return [];
}

/** The examples of a docstring: an expression, and what it says after // about the value. */
function examplesOf(comment: string): { code: string; says: string }[] {
  const plain = comment.replace(/^ \* ?/gm, '').replace(/\n {2,}/g, ' ');
  return [...plain.matchAll(/@example ([^\n]+)/g)].map(([, line]) => {
    const [code, says = ''] = line.replace(/ @\w.*$/, '').split(' // ');
    return { code: code.trim(), says: says.trim() };
  });
}

describe('public functions', () => {
  it.each(publicFunctions)('%s says what it does, with an example', (name) => {
    const comment = docstrings.get(name);
    expect(comment, `${name} has no docstring`).toBeDefined();
    if (/Error$|^require|^Generator$/.test(name)) return;
    expect(comment).toContain('@example');
  });

  const running = publicFunctions.filter((name) => !ofThreads.includes(name));
  const all = running.flatMap((name) => examplesOf(docstrings.get(name) ?? '').map((example) => ({ name, ...example })));
  it.each(all)('$name: $code', ({ name, code, says }) => {
    const own = scopeOf(name);
    // oxlint-disable-next-line typescript/no-implied-eval -- the text of the docstring is the code under test
    const value: unknown = new Function(...Object.keys(own), `return (${code});`)(...Object.values(own));
    expect(value).not.toBeUndefined();
    // Figures in words ("for instance", "the fit's own objective") are not compared.
    if (!/^[[{\d-]/.test(says)) return;
    const figures = says.match(/-?\d+(\.\d+)?(e-?\d+)?/g) ?? [];
    const found = numbersIn(value);
    expect(found).toHaveLength(figures.length);
    figures.forEach((figure, i) => {
      const digits = (figure.split('.')[1] ?? '').length;
      expect(Math.abs(found[i] - Number(figure)), `${found[i]} where ${figure} is written`).toBeLessThanOrEqual(
        0.5 * 10 ** -digits + 1e-9,
      );
    });
  });
});
