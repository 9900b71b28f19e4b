import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import {
  Generator,
  auc,
  crossValidate,
  fitIndependently,
  fitPath,
  largestLambda,
  linearPredictor,
  objective,
  type FitProblem,
  type Penalty,
} from '@tallystone/numeric';
import { answer, answersOfR, type Answers } from './programs';
import type { DataFolder } from './reference-fits';
import { Largest, orOne, type Report } from './report';

const GLMNET = 'glmnet, threshold 1e-26';

interface Recipe {
  readonly id: string;
  readonly title: string;
  readonly rows: number;
  readonly columns: number;
  readonly mixing: number;
  readonly standardize: boolean;
  readonly weights?: 'whole' | 'real';
  readonly factors?: boolean;
  readonly limits?: 'lower 0' | 'both';
  readonly offset?: boolean;
  /** Blocks of dummies that add up to one: exactly collinear, so that only fitted values and objective are unique under the lasso. */
  readonly dummies?: boolean;
  readonly folds?: number;
}

const recipes: readonly Recipe[] = [
  { id: 'p1', title: 'L1', rows: 900, columns: 14, mixing: 1, standardize: true },
  { id: 'p2', title: 'L1, not standardised', rows: 600, columns: 9, mixing: 1, standardize: false },
  { id: 'p3', title: 'L2', rows: 900, columns: 14, mixing: 0, standardize: true },
  { id: 'p4', title: 'L2, not standardised', rows: 600, columns: 9, mixing: 0, standardize: false },
  { id: 'p5', title: 'net', rows: 900, columns: 14, mixing: 0.5, standardize: true },
  { id: 'p6', title: 'net, whole weights', rows: 700, columns: 10, mixing: 0.3, standardize: true, weights: 'whole' },
  { id: 'p7', title: 'L1, real weights', rows: 700, columns: 10, mixing: 1, standardize: true, weights: 'real' },
  {
    id: 'p8',
    title: 'L2, real weights, offset',
    rows: 700,
    columns: 10,
    mixing: 0,
    standardize: true,
    weights: 'real',
    offset: true,
  },
  { id: 'p9', title: 'L1, penalty factors', rows: 700, columns: 12, mixing: 1, standardize: true, factors: true },
  {
    id: 'p10',
    title: 'net, penalty factors, not standardised',
    rows: 700,
    columns: 12,
    mixing: 0.7,
    standardize: false,
    factors: true,
  },
  { id: 'p11', title: 'L1, lower limits 0', rows: 800, columns: 12, mixing: 1, standardize: true, limits: 'lower 0' },
  { id: 'p12', title: 'net, limits on both sides', rows: 800, columns: 12, mixing: 0.5, standardize: true, limits: 'both' },
  {
    id: 'p13',
    title: 'L2, limits, weights, factors',
    rows: 800,
    columns: 12,
    mixing: 0,
    standardize: true,
    limits: 'both',
    weights: 'real',
    factors: true,
  },
  { id: 'p14', title: 'net, fewer rows than columns', rows: 60, columns: 90, mixing: 0.5, standardize: true },
  { id: 'p15', title: 'L1, collinear dummies', rows: 800, columns: 30, mixing: 1, standardize: true, dummies: true },
  { id: 'p16', title: 'L2, collinear dummies', rows: 800, columns: 30, mixing: 0, standardize: true, dummies: true },
  { id: 'v1', title: 'L1, 10 folds', rows: 1000, columns: 12, mixing: 1, standardize: true, folds: 10 },
  {
    id: 'v2',
    title: 'net, 5 folds, real weights',
    rows: 900,
    columns: 10,
    mixing: 0.5,
    standardize: true,
    folds: 5,
    weights: 'real',
  },
  { id: 'v3', title: 'L2, 7 folds, not standardised', rows: 900, columns: 10, mixing: 0, standardize: false, folds: 7 },
];

interface Drawn {
  readonly recipe: Recipe;
  readonly problem: FitProblem;
  readonly lambdas: number[];
  readonly folds: Uint8Array;
}

/** Correlated columns of mixed scales, some of few values, and an outcome that depends on two thirds of them. */
function draw(recipe: Recipe, random: Generator): Drawn {
  const { rows, columns: count } = recipe;
  const shared = Float64Array.from({ length: rows }, () => random.normal());
  const scales = [1, 0.05, 30, 1, 5];
  const dummy = (): Float64Array[] => {
    const values = Array.from({ length: rows }, () => random.below(5));
    return Array.from({ length: 5 }, (_, level) => Float64Array.from(values, (value) => (value === level ? 1 : 0)));
  };
  const columns = recipe.dummies
    ? Array.from({ length: count / 5 }, dummy).flat()
    : Array.from({ length: count }, (_, j) => {
        const load = 0.8 * random.uniform();
        const scale = recipe.standardize ? scales[j % scales.length] : 1;
        return shared.map((s) => {
          const value = load * s + random.normal();
          return scale * (j % 3 === 1 ? Math.round(value) : value) + (j % 4 === 2 ? 3 * scale : 0);
        });
      });
  const offset = recipe.offset ? Float64Array.from({ length: rows }, () => random.normal() / 2) : undefined;
  const deviations = columns.map((column) => {
    const mean = column.reduce((sum, x) => sum + x, 0) / rows;
    return [mean, Math.sqrt(column.reduce((sum, x) => sum + (x - mean) ** 2, 0) / rows) || 1];
  });
  const slopes = columns.map((_, j) => (j % 3 === 2 ? 0 : (0.8 * random.normal()) / Math.sqrt(count / 6)));
  const outcome = Uint8Array.from({ length: rows }, (_, i) => {
    const eta = columns.reduce((sum, column, j) => sum + (slopes[j] * (column[i] - deviations[j][0])) / deviations[j][1], 0.6);
    return random.uniform() < 1 / (1 + Math.exp(-eta - (offset?.[i] ?? 0))) ? 1 : 0;
  });
  const weightOf = { whole: () => 1 + random.below(4), real: () => 0.2 + 2 * random.uniform() };
  const { weights: kind, limits } = recipe;
  const given = recipe.factors ? Float64Array.from(columns, (_, j) => (j === 0 ? 0 : 0.25 + random.uniform())) : undefined;
  // glmnet rescales factors to sum to the number of columns; here multipliers are used as given.
  const total = given?.reduce((sum, factor) => sum + factor, 0) ?? 1;
  const penalty: Penalty = {
    mixing: recipe.mixing,
    standardize: recipe.standardize,
    multipliers: given?.map((factor) => (factor * columns.length) / total),
    lower: limits ? Float64Array.from(columns, (_, j) => (limits === 'both' ? -0.1 / deviations[j][1] : 0)) : undefined,
    upper: limits === 'both' ? Float64Array.from(columns, (_, j) => 0.15 / deviations[j][1]) : undefined,
  };
  const problem: FitProblem = {
    columns,
    outcome,
    weights: kind ? Float64Array.from({ length: rows }, weightOf[kind]) : undefined,
    offset,
    penalty,
  };
  const folds = Uint8Array.from({ length: rows }, (_, i) => (i % (recipe.folds ?? 2)) + 1);
  return { recipe, problem, lambdas: gridOf(problem, recipe.folds ? 15 : 8), folds };
}

/** Logarithmic, from just below the largest lambda; for ridge from where it begins to matter. */
function gridOf(problem: FitProblem, count: number): number[] {
  const largest = largestLambda(problem) * (problem.penalty.mixing === 0 ? 0.01 : 1);
  return Array.from({ length: count }, (_, k) => 0.9 * largest * 0.002 ** (k / (count - 1)));
}

function write(folder: string, { recipe, problem, lambdas, folds }: Drawn): void {
  const { columns, outcome, weights, offset, penalty } = problem;
  const save = (part: string, head: string[], lines: (number | string)[][]): void =>
    writeFileSync(join(folder, `${recipe.id}-${part}.csv`), [head, ...lines].map((line) => line.join(',')).join('\n') + '\n');
  const rows = Array.from(outcome.keys());
  save(
    'x',
    columns.map((_, j) => `x${j}`),
    rows.map((i) => columns.map((column) => column[i])),
  );
  save(
    'rows',
    ['y', 'w', 'o', 'fold'],
    rows.map((i) => [outcome[i], weights?.[i] ?? 1, offset?.[i] ?? 0, folds[i]]),
  );
  const limit = (value: number | undefined, none: string): number | string =>
    value === undefined || !Number.isFinite(value) ? none : value;
  save(
    'columns',
    ['factor', 'lower', 'upper'],
    columns.map((_, j) => [penalty.multipliers?.[j] ?? 1, limit(penalty.lower?.[j], '-Inf'), limit(penalty.upper?.[j], 'Inf')]),
  );
  save(
    'lambda',
    ['lambda'],
    lambdas.map((lambda) => [lambda]),
  );
}

function comparePath(report: Report, { recipe, problem, lambdas }: Drawn, answers: Answers): void {
  const path = fitPath(problem, { lambdas }, { tolerance: 1e-11 });
  const intercepts = answer(answers, `${recipe.id}-intercept`);
  const flat = answer(answers, `${recipe.id}-coefficients`);
  const size = problem.columns.length;
  const coefficients = new Largest();
  const objectives = new Largest();
  const explained = new Largest();
  explained.all(
    path.fits.map((fit) => 1 - fit.deviance / path.nullDeviance),
    answer(answers, `${recipe.id}-explained`),
  );
  const [nulls] = answer(answers, `${recipe.id}-null`);
  explained.see(path.nullDeviance, nulls, nulls);
  path.fits.forEach((fit, k) => {
    const theirs = {
      lambda: fit.lambda,
      intercept: intercepts[k],
      coefficients: Float64Array.from(flat.slice(k * size, (k + 1) * size)),
    };
    if (fit.status !== 'converged') coefficients.see(NaN, 0);
    const wanted = objective(problem, theirs);
    objectives.see(fit.objective, wanted, wanted);
    if (recipe.dummies) {
      const of = (point: { intercept: number; coefficients: Float64Array }): Float64Array =>
        linearPredictor(problem.columns, point.intercept, point.coefficients);
      coefficients.all(of(fit), of(theirs));
    } else {
      coefficients.see(fit.intercept, theirs.intercept, orOne(theirs.intercept));
      coefficients.all(fit.coefficients, theirs.coefficients, orOne);
    }
  });
  const what = recipe.dummies ? 'fitted log odds' : 'coefficients';
  report.add(`${recipe.title}: ${what}`, GLMNET, coefficients.value, 1e-7);
  report.add(`${recipe.title}: objective, relative`, GLMNET, objectives.value, 1e-10);
  report.add(`${recipe.title}: explained deviance`, GLMNET, explained.value, 1e-8);
  if (recipe.dummies) return;
  const place = 4;
  const second = new Largest();
  const fit = fitIndependently(problem, lambdas[place], { tolerance: 1e-10 });
  second.see(fit.intercept, intercepts[place], orOne(intercepts[place]));
  second.all(fit.coefficients, flat.slice(place * size, (place + 1) * size), orOne);
  report.add(`${recipe.title}: second method`, GLMNET, second.value, 1e-6);
}

function compareFolds(report: Report, { recipe, problem, lambdas, folds }: Drawn, answers: Answers): void {
  const count = recipe.folds ?? 0;
  const areas = lambdas.map(() => new Float64Array(count));
  const own = crossValidate(problem, folds, lambdas, {
    onFoldFit: (fold, index, _, eta) => {
      const rows = Array.from(folds.keys()).filter((i) => folds[i] === fold);
      const { outcome, weights } = problem;
      areas[index][fold - 1] = auc(
        rows.map((i) => eta[i]),
        rows.map((i) => outcome[i]),
        weights && rows.map((i) => weights[i]),
      );
    },
  });
  const figures = new Largest();
  figures.all(own.mean, answer(answers, `${recipe.id}-mean`));
  figures.all(own.standardError, answer(answers, `${recipe.id}-error`));
  report.add(`${recipe.title}: mean and standard error`, 'cv.glmnet', own.converged ? figures.value : NaN, 1e-6);
  const chosen = new Largest();
  chosen.all([own.minimum + 1, own.oneStandardError + 1], answer(answers, `${recipe.id}-chosen`));
  report.add(`${recipe.title}: chosen indices`, 'cv.glmnet', chosen.value, 0);
  const total = own.folds.reduce((sum, { weight }) => sum + weight, 0);
  const means = areas.map((of) => own.folds.reduce((sum, { weight }, k) => sum + weight * of[k], 0) / total);
  const area = new Largest();
  area.all(means, answer(answers, `${recipe.id}-areas`));
  // One pair of a fold that changes order moves its area by one over its goods times its bads, about 1/2000, and the mean by that over the folds.
  report.add(`${recipe.title}: ${problem.weights ? 'weighted ' : ''}AUC by fold`, 'cv.glmnet', area.value, 3e-4);
}

/** Draws problems from the seed, fits them here and with glmnet, and compares path by path and fold by fold. */
export function checkFreshFits(report: Report, seed: number, folder: string): void {
  compareAll(
    report,
    recipes.map((recipe, stream) => draw(recipe, new Generator(seed, stream))),
    folder,
  );
}

/** Public data sets that are fitted as they are, when the folder holds them: every column named, rows with a missing value left out. */
const givenData = [
  { file: 'biopsy.csv', event: 'malignant', columns: ['V1', 'V2', 'V3', 'V4', 'V5', 'V6', 'V7', 'V8', 'V9'] },
  {
    file: 'creditcard_greene.csv',
    event: 'declined',
    columns: ['reports', 'age', 'income', 'dependents', 'months', 'majorcards', 'active'],
  },
  {
    file: 'south_german_credit.csv',
    event: 'bad',
    columns: [
      'status',
      'duration',
      'credit_history',
      'amount',
      'savings',
      'employment_duration',
      'installment_rate',
      'age',
      'housing',
    ],
  },
];

/** Fits public data with both programs, lasso and ridge. */
export function checkGivenData(report: Report, data: DataFolder | undefined, folder: string): void {
  const there = givenData.filter(({ file }) => data?.has(file));
  givenData
    .filter((each) => !there.includes(each))
    .forEach(({ file }) => report.notChecked(`${file} against glmnet (give a folder that holds it with --data)`));
  if (!data || there.length === 0) return;
  const problems = there.flatMap(({ file, event, columns }, place) => {
    const table = data.table(file);
    const texts = columns.map((name) => table.text(name));
    const whole = table.text(event).flatMap((_, i) => (texts.every((column) => column[i] !== '') ? [i] : []));
    const events = table.numbers(event);
    return [1, 0].map((mixing): Drawn => {
      const problem: FitProblem = {
        columns: texts.map((column) => Float64Array.from(whole, (i) => Number(column[i]))),
        outcome: Uint8Array.from(whole, (i) => 1 - events[i]),
        penalty: { mixing, standardize: true },
      };
      const recipe: Recipe = {
        id: `g${place}${mixing}`,
        title: `${file}, ${whole.length} x ${columns.length}, ${mixing === 1 ? 'L1' : 'L2'}`,
        rows: whole.length,
        columns: columns.length,
        mixing,
        standardize: true,
      };
      return { recipe, problem, lambdas: gridOf(problem, 8), folds: new Uint8Array(whole.length).fill(1) };
    });
  });
  compareAll(report, problems, folder);
}

function compareAll(report: Report, drawn: readonly Drawn[], folder: string): void {
  mkdirSync(folder, { recursive: true });
  drawn.forEach((one) => write(folder, one));
  const lines = drawn.map(({ recipe: { id, folds, mixing, standardize } }) =>
    [id, folds ? 'cv' : 'path', mixing, standardize ? 'TRUE' : 'FALSE'].join(','),
  );
  writeFileSync(join(folder, 'cases.csv'), ['id,kind,mixing,standardize', ...lines].join('\n') + '\n');
  const answers = answersOfR('fits.R', folder);
  drawn.forEach((one) => (one.recipe.folds ? compareFolds : comparePath)(report, one, answers));
}
