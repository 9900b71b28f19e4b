import { expect } from 'vitest';
import {
  auc,
  automaticGrid,
  fitAt,
  fitIndependently,
  largestLambda,
  probabilityOfBad,
  priorCorrectedIntercept,
  quantileType7,
  stratifiedBootstrap,
  weightOfEvidence,
  type FitProblem,
} from '@tallystone/numeric';
import { problemOf, referenceFits, tableOf } from './penalised-fits';
import type { Handler } from './published-values';
import { expectNear } from './reference-files';

type Numbers = Record<string, number>;
const repeat = (value: number, times: number): number[] => Array.from({ length: times }, () => value);

/** Two rows, x = -1 and 1, bad and good. */
const twoPoints = (mixing: number, { x, y }: Record<string, number[]>): FitProblem => ({
  columns: [Float64Array.from(x)],
  outcome: Uint8Array.from(y),
  penalty: { mixing, standardize: false },
});

/** Mean, standard deviation and number of a statistic over resamples. */
function overResamples(outcome: Uint8Array, count: number, statistic: (weights: Uint16Array) => number): Float64Array {
  return Float64Array.from({ length: count }, (_, b) => statistic(stratifiedBootstrap(outcome, 4, b)));
}

const mean = (values: Float64Array): number => values.reduce((sum, value) => sum + value, 0) / values.length;
const deviation = (values: Float64Array): number => {
  const centre = mean(values);
  return Math.sqrt(values.reduce((sum, value) => sum + (value - centre) ** 2, 0) / values.length);
};

export const fitChecks: Record<string, Handler> = {
  /** Good 1950: an unpenalised fit on one unsmoothed WOE column has slope 1 and the prior log odds as intercept. */
  single_woe_logistic_identity: (
    { good, bad }: Record<string, number[]>,
    wanted: { woe: number[]; model_good: Numbers; model_bad: Numbers; fitted_bad_rate: number[] },
  ) => {
    const { woe } = weightOfEvidence(good, bad, { amount: 0, when: 'never' });
    wanted.woe.forEach((value, i) => expectNear(woe[i], value, 1e-12));
    const problem: FitProblem = {
      columns: [Float64Array.from([...woe, ...woe])],
      outcome: Uint8Array.of(1, 1, 1, 0, 0, 0),
      weights: Float64Array.from([...good, ...bad]),
      penalty: { mixing: 1, standardize: true },
    };
    const fit = fitAt(problem, 0, { tolerance: 1e-13 });
    expectNear(fit.coefficients[0], wanted.model_good.slope, 1e-10);
    expectNear(fit.intercept, wanted.model_good.intercept, 1e-10);
    const mirrored = fitAt({ ...problem, outcome: problem.outcome.map((y) => 1 - y) }, 0, { tolerance: 1e-13 });
    expectNear(mirrored.coefficients[0], wanted.model_bad.slope, 1e-10);
    expectNear(mirrored.intercept, wanted.model_bad.intercept, 1e-10);
    wanted.fitted_bad_rate.forEach((rate, i) =>
      expectNear(probabilityOfBad(fit.intercept + fit.coefficients[0] * woe[i]), rate, 1e-10),
    );
  },
  /** Closed form ln((1 - lambda)/lambda): separated data have a finite penalised optimum and no unpenalised one. */
  l1_two_point_closed_form: (inputs: Record<string, number[]>, wanted: { beta_l1: number[] }) => {
    inputs.lambda_.forEach((lambda, i) => {
      for (const fit of [
        fitAt(twoPoints(1, inputs), lambda, { tolerance: 1e-12 }),
        fitIndependently(twoPoints(1, inputs), lambda, { tolerance: 1e-12 }),
      ]) {
        expect(fit.status).toBe('converged');
        expectNear(fit.coefficients[0], wanted.beta_l1[i], 1e-10);
        expectNear(fit.intercept, 0, 1e-10);
      }
    });
    expect(fitAt(twoPoints(1, inputs), 0).status).toBe('separation');
  },
  /** lambda b = 1/(1 + e^b). */
  ridge_two_point: (inputs: Record<string, number[]>, wanted: { beta_l2: number[] }) =>
    inputs.lambda_.forEach((lambda, i) =>
      expectNear(fitAt(twoPoints(0, inputs), lambda, { tolerance: 1e-13 }).coefficients[0], wanted.beta_l2[i], 1e-10),
    ),
  ridge_duplicate_column: (_: unknown, wanted: Record<string, { intercept: number; coef: number[] }>) => {
    const table = tableOf('data/pima.csv');
    const glu = table.numbers('glu');
    const centre = mean(glu);
    const spread = deviation(glu);
    const z = glu.map((x) => (x - centre) / spread);
    const problem = (count: number): FitProblem => ({
      columns: repeat(0, count).map(() => z),
      outcome: table.goods('diabetes'),
      penalty: { mixing: 0, standardize: false },
    });
    const check = (count: number, lambda: number, reference: { intercept: number; coef: number[] }): void => {
      const fit = fitAt(problem(count), lambda, { tolerance: 1e-12 });
      expectNear(fit.intercept, -reference.intercept, 1e-10);
      reference.coef.forEach((value, j) => expectNear(fit.coefficients[j], -value, 1e-10));
    };
    check(1, 0.05, wanted.single_lambda_0_05);
    check(2, 0.1, wanted.duplicate_lambda_0_1);
    check(2, 0.05, wanted.duplicate_lambda_0_05);
  },
  integer_weights_equal_replication: (_: unknown, wanted: Numbers) => {
    const reference = referenceFits.find(({ id }) => id === 'german_woe_a1_std1_weights_cycle');
    if (!reference) throw new Error('missing');
    const { problem } = problemOf(reference);
    const rows = Array.from(problem.weights ?? []).flatMap((w, i) => repeat(i, w));
    expect(rows).toHaveLength(wanted.rows_after_replication);
    const repeated: FitProblem = {
      columns: problem.columns.map((column) => Float64Array.from(rows, (i) => column[i])),
      outcome: Uint8Array.from(rows, (i) => problem.outcome[i]),
      penalty: problem.penalty,
    };
    const scaled: FitProblem = { ...problem, weights: problem.weights?.map((w) => 0.37 * w) };
    const fit = fitAt(problem, 0.01, { tolerance: 1e-12 });
    for (const other of [fitAt(repeated, 0.01, { tolerance: 1e-12 }), fitAt(scaled, 0.01, { tolerance: 1e-12 })]) {
      fit.coefficients.forEach((value, j) => expectNear(other.coefficients[j], value, 1e-8));
      expectNear(other.intercept, fit.intercept, 1e-8);
    }
  },
  /** Friedman, Hastie and Tibshirani 2010, section 2.5; glmnet 4.1-6 starts there. */
  lambda_max_german_woe: (
    _: unknown,
    wanted: { default_path_first_last: [number, number] } & Record<string, number | string | number[]>,
  ) => {
    const table = tableOf('data/german_credit_woe.csv');
    const columns = table.columns.filter((name) => name !== 'bad').map((name) => table.numbers(name));
    const largest = (mixing: number, standardize: boolean): number =>
      largestLambda({ columns, outcome: table.goods('bad'), penalty: { mixing, standardize } });
    expectNear(largest(1, true), Number(wanted.lambda_max_alpha1_standardize), 1e-12);
    expectNear(largest(1, false), Number(wanted.lambda_max_alpha1_nostandardize), 1e-12);
    expectNear(largest(0.5, true), Number(wanted.lambda_max_alpha05_standardize), 1e-12);
    expectNear(largest(0, true), 1000 * Number(wanted.lambda_max_alpha1_standardize), 1e-9);
    const grid = automaticGrid(largest(1, true), 100, 1e-4);
    expectNear(grid[0], wanted.default_path_first_last[0], 1e-12);
    expectNear(grid[99], wanted.default_path_first_last[1], 1e-12);
  },
  /** King and Zeng 2001, eq. (7) (formula from memory); signs changed for ln(good:bad). */
  prior_correction: ({ ybar, tau, b0 }: Numbers, wanted: Numbers) =>
    expectNear(priorCorrectedIntercept(-b0, ybar, tau), -wanted.b0_corrected, 1e-12),
  /** Efron and Tibshirani 1993: ideal bootstrap of a mean, all 5^5 resamples enumerated. Monte-Carlo error only, four of its standard errors. */
  exact_bootstrap_mean: ({ x }: { x: number[] }, wanted: { se: number; formula: number; q025_q975_inverted_cdf: number[] }) => {
    const count = 20_000;
    expectNear(deviation(Float64Array.from(x)) / Math.sqrt(x.length), wanted.formula, 1e-14);
    const means = overResamples(
      Uint8Array.from(repeat(1, x.length)),
      count,
      (weights) => x.reduce((sum, value, i) => sum + weights[i] * value, 0) / x.length,
    );
    expectNear(mean(means), 4, (4 * wanted.se) / Math.sqrt(count));
    expectNear(deviation(means), wanted.se, (4 * wanted.se) / Math.sqrt(2 * count));
    // The mean moves in steps of 0.2.
    expectNear(quantileType7(means, 0.025), wanted.q025_q975_inverted_cdf[0], 0.2);
    expectNear(quantileType7(means, 0.975), wanted.q025_q975_inverted_cdf[1], 0.2);
  },
  /** All 3^3 x 4^4 stratified resamples enumerated. Monte-Carlo error only. */
  exact_bootstrap_auc_stratified: ({ bad_scores, good_scores }: Record<string, number[]>, wanted: Numbers) => {
    const count = 20_000;
    const scores = [...bad_scores, ...good_scores].map((s) => -s);
    const outcome = Uint8Array.from([...repeat(0, bad_scores.length), ...repeat(1, good_scores.length)]);
    const areas = overResamples(outcome, count, (weights) => auc(scores, outcome, weights));
    expectNear(auc(scores, outcome), wanted.auc, 1e-14);
    expectNear(mean(areas), wanted.bootstrap_mean, (4 * wanted.bootstrap_se) / Math.sqrt(count));
    expectNear(deviation(areas), wanted.bootstrap_se, (4 * wanted.bootstrap_se) / Math.sqrt(2 * count));
    expectNear(quantileType7(areas, 0.025), wanted.q025, 1e-9);
    expectNear(quantileType7(areas, 0.975), wanted.q975, 1e-9);
  },
};
