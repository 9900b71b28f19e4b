import { createHash } from 'node:crypto';
import { Worker } from 'node:worker_threads';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  Alone,
  Engine,
  Generator,
  Team,
  codedColumns,
  type CodedProblem,
  type Crew,
  type FoldBatch,
  type HelpOrder,
} from '@tallystone/numeric';
import { randomProblem } from '../../../libs/numeric/testing/problems';
import { entryFile } from '../running/entry-files';
import { crewFor } from './crew';

const ROWS = 20_000;
const grid = { count: 30, smallestRatio: 1e-3, earlyStop: false };

function problem(rows = ROWS): CodedProblem {
  const { columns, outcome } = randomProblem(8, rows, 9, { mixing: 1, standardize: true });
  const random = new Generator(3);
  return {
    columns: [...codedColumns(columns.slice(1)), { kind: 'linear', values: columns[0].map((value) => value + random.normal()) }],
    outcome,
    weights: Float64Array.from(outcome, () => 0.5 + random.uniform()),
    penalty: { mixing: 1, standardize: true },
  };
}

/** Every bit of a path, a cross-validation and some resamples. */
function everything(crew?: Crew): string {
  const hash = createHash('sha256');
  const numbers = (...values: ArrayLike<number>[]): void => values.forEach((some) => void hash.update(Float64Array.from(some)));
  const engine = new Engine(problem(), { crew, folds: Uint8Array.from({ length: ROWS }, (_, i) => (i % 5) + 1), counted: true });
  const { fits } = engine.path(grid, { tolerance: 1e-9 });
  fits.forEach((fit) => numbers([fit.intercept, fit.deviance, fit.objective, fit.optimalityResidual], fit.coefficients));
  const lambdas = fits.map(({ lambda }) => lambda);
  engine.crossValidate(lambdas).folds.forEach((fold) => numbers(fold?.deviance ?? []));
  engine.resample(lambdas.slice(20, 21), { seed: 5, count: 9 }, (draw) => numbers([draw.intercept], draw.coefficients));
  engine.close();
  return hash.digest('hex');
}

describe('threads that share a fit', () => {
  const workers: Worker[] = [];
  const send = (k: number) => (order: HelpOrder) => workers[k].postMessage(order);

  beforeAll(async () => {
    for (let k = 0; k < 3; k++) workers.push(new Worker(entryFile('threads/helper-entry'), { execArgv: [] }));
    await Promise.all(workers.map((worker) => new Promise((resolve) => worker.once('online', resolve))));
  });
  afterAll(async () => void (await Promise.all(workers.map((worker) => worker.terminate()))));

  const alone = everything();

  it('give the same bits on one, two and four threads, and the helpers take part', () => {
    for (const helpers of [1, 3]) {
      const team = new Team(Array.from({ length: helpers }, (_, k) => send(k)));
      // A helper may be late to its first fit; by the third it has been there for a while.
      for (let fit = 0; fit < 20 && (fit < 2 || team.helped === 0); fit++) expect(everything(team)).toBe(alone);
      expect(team.helped).toBeGreaterThan(0);
    }
  });

  it('give the same bits when a helper never comes', () => {
    expect(everything(new Team([() => {}]))).toBe(alone);
  });

  it('are used for what is worth it', () => {
    expect(crewFor(1000).helpers).toBe(0);
    expect(everything(crewFor(5_000_000))).toBe(alone);
  });

  /** Every bit of the folds of a small problem: deviances, residuals and fits, with values of a fold's own. */
  function folds(crew?: Crew): unknown {
    const small = problem(3000);
    const own = small.columns.map(({ kind, values }, j) =>
      kind === 'coded' ? values.map((value) => value * (1 + j / 100)) : values,
    );
    const engine = new Engine(small, { crew, folds: Uint8Array.from({ length: 3000 }, (_, i) => (i % 5) + 1) });
    const lambdas = engine.path(grid).fits.map(({ lambda }) => lambda);
    const fits: Record<string, unknown> = {};
    const validated = engine.crossValidate(lambdas, {
      valuesForFold: (fold) => (fold % 2 === 0 ? own : null),
      onFoldFit: (fold, place, fit) => (fits[`${fold} ${place}`] = fit),
    });
    engine.close();
    expect(Object.keys(fits)).toHaveLength(5 * lambdas.length);
    return { validated, fits };
  }

  it('are given folds of a small problem, and find the same bits', () => {
    const expected = folds();
    const sheets: Int32Array[] = [];
    const delegate = (batch: FoldBatch): void => {
      sheets.push(new Int32Array(batch.sheet, 0, 1));
      workers[0].postMessage(batch);
      // Until the thread has begun: in the product the owner has folds of its own to do meanwhile.
      const until = performance.now() + 5000;
      while (Atomics.load(sheets[0], 0) === 0 && performance.now() < until);
    };
    expect(folds(new Alone(delegate))).toEqual(expected);
    expect(Atomics.load(sheets[0], 0)).toBe(2);
  });

  it('do not keep a small problem waiting: folds that nobody takes, or that are given up, are the owner’s', () => {
    const expected = folds();
    expect(folds(new Alone(() => {}))).toEqual(expected);
    expect(folds(new Alone(({ sheet }) => void Atomics.store(new Int32Array(sheet, 0, 1), 0, 3)))).toEqual(expected);
  });
});
