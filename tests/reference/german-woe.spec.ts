import { describe, expect, it } from 'vitest';
import { Matrix, inverse } from 'ml-matrix';
import {
  conditionIndex,
  fitAt,
  fitForeignChallenger,
  normalQuantile,
  nullDeviance,
  rateInterval,
  standardErrors,
  varianceInflation,
  weightOfEvidence,
  type Smoothing,
} from '@tallystone/numeric';
import { countsOf, type BinSpec } from './german-bins';
import { tableOf } from './penalised-fits';
import { expectAllRead, expectNear, expected } from './reference-files';

interface Bin {
  readonly label: string;
  readonly n: number;
  readonly good: number;
  readonly bad: number;
  readonly bad_rate: number;
  readonly pct_good: number;
  readonly pct_bad: number;
  readonly woe: number;
  readonly iv: number;
}
interface Variable {
  readonly spec: BinSpec;
  readonly table: Bin[];
  readonly iv: number;
}
interface WoeFile {
  readonly variables: Record<string, Variable>;
  readonly iv_ranking: [string, number][];
  readonly convention_variants: {
    readonly duration_edges_12_18_24_36_closed_right: Variable;
    readonly duration_edges_12_18_24_36_closed_left: Variable;
    readonly purpose_all_levels: Variable & {
      readonly woe_plus_half_totals_adjusted: number[];
      readonly woe_plus_half_totals_not_adjusted: number[];
    };
  };
}

const raw = tableOf('data/german_credit.csv');
const coded = tableOf('data/german_credit_woe.csv');
const outcome = raw.goods('bad');
const never: Smoothing = { amount: 0, when: 'never' };

describe('weight of evidence of German credit', () => {
  // Source: expected/german_woe_bins.json, computed in Python from the Statlog German credit data (H. Hofmann 1994, UCI 144); 1e-12 as stated there.
  const file = expected<WoeFile>('german_woe_bins.json');

  const check = (column: string, spec: BinSpec, variable: Variable): void => {
    const counts = countsOf(raw, column, spec, outcome);
    const result = weightOfEvidence(counts.goods, counts.bads, never);
    variable.table.forEach((bin, i) => {
      expect([counts.rows[i], counts.goods[i], counts.bads[i]]).toEqual([bin.n, bin.good, bin.bad]);
      expectNear(rateInterval(counts.bads[i], counts.rows[i])?.rate ?? NaN, bin.bad_rate, 1e-14, bin.label);
      expectNear(counts.goods[i] / 700, bin.pct_good, 1e-14, bin.label);
      expectNear(counts.bads[i] / 300, bin.pct_bad, 1e-14, bin.label);
      expectNear(result.woe[i], bin.woe, 1e-12, `${column} ${bin.label}`);
      expectNear(result.parts[i], bin.iv, 1e-12, `${column} ${bin.label}`);
    });
    expectNear(result.informationValue, variable.iv, 1e-12, column);
    expect(result.smoothed).toBe(false);
  };

  it.each(Object.entries(file.variables))('%s', (column, variable) => {
    check(column, variable.spec, variable);
    // The coded file is the same table applied to the rows.
    const counts = countsOf(raw, column, variable.spec, outcome);
    const { woe } = weightOfEvidence(counts.goods, counts.bads, never);
    const values = new Set(coded.numbers(column));
    expect([...values].every((value) => woe.some((w) => Math.abs(w - value) < 1e-12))).toBe(true);
  });

  it('covers all twenty characteristics, in the order of information value', () => {
    expect(Object.keys(file.variables)).toHaveLength(20);
    const own = Object.entries(file.variables).map(([column, { spec }]): [string, number] => {
      const counts = countsOf(raw, column, spec, outcome);
      return [column, weightOfEvidence(counts.goods, counts.bads, never).informationValue];
    });
    own.sort((a, b) => b[1] - a[1]);
    expect(own.map(([column]) => column)).toEqual(file.iv_ranking.map(([column]) => column));
    own.forEach(([column, value], place) => expectNear(value, file.iv_ranking[place][1], 1e-12, column));
  });

  it('edges on observed values: right-closed and left-closed bins differ as they should', () => {
    const edges = [12, 18, 24, 36];
    check(
      'duration',
      { type: 'numeric', edges, closed: 'right' },
      file.convention_variants.duration_edges_12_18_24_36_closed_right,
    );
    check(
      'duration',
      { type: 'numeric', edges, closed: 'left' },
      file.convention_variants.duration_edges_12_18_24_36_closed_left,
    );
  });

  it('half a count in every cell, with adjusted totals', () => {
    const variant = file.convention_variants.purpose_all_levels;
    const spec: BinSpec = { type: 'categorical', groups: variant.table.map(({ label }) => [label]) };
    check('purpose', spec, variant);
    const counts = countsOf(raw, 'purpose', spec, outcome);
    const { woe, smoothed } = weightOfEvidence(counts.goods, counts.bads, { amount: 0.5, when: 'always' });
    expect(smoothed).toBe(true);
    variant.woe_plus_half_totals_adjusted.forEach((value, i) => expectNear(woe[i], value, 1e-12, variant.table[i].label));
    // The other convention, with unadjusted totals, is not this project's: it differs by a constant and must not be met.
    const K = counts.goods.length;
    const shift = Math.log((700 + K / 2) / 700 / ((300 + K / 2) / 300));
    variant.woe_plus_half_totals_not_adjusted.forEach((value, i) => expectNear(woe[i] + shift, value, 1e-12, 'other convention'));
    expect(Math.abs(shift)).toBeGreaterThan(1e-3);
  });
});

describe('the unpenalised fit on WOE-coded German credit', () => {
  interface Glm {
    readonly fit: {
      readonly term: string[];
      readonly estimate: number[];
      readonly se: number[];
      readonly z: number[];
      readonly loglik: number;
      readonly deviance: number;
      readonly null_deviance: number;
      readonly aic: number;
    };
    readonly wald_ci95: { readonly lower: number[]; readonly upper: number[] };
    readonly vcov_diag: number[];
    readonly vif_from_glm_vcov: { readonly value: Record<string, number> };
    readonly vif_classical: { readonly value: Record<string, number> };
    readonly corr_condition_number: number;
  }
  // Source: expected/german_woe_glm_vif.json, R 4.2.2 glm (epsilon 1e-15) and the classical VIF; tolerances as stated there.
  const reference = expected<Glm>('german_woe_glm_vif.json');
  const names = reference.fit.term.slice(1);
  const columns = names.map((name) => coded.numbers(name));
  const problem = { columns, outcome, penalty: { mixing: 1, standardize: true } };
  const fit = fitAt(problem, 0, { tolerance: 1e-12 });

  it('has R glm coefficients, standard errors and deviance', () => {
    expect(fit.status).toBe('converged');
    const errors = standardErrors(problem, fit);
    // The variance of "dependents" is 1e-4 of the others, so its coefficient carries the residual times about 1e4: 1e-8 still.
    [fit.intercept, ...fit.coefficients].forEach((value, j) =>
      expectNear(value, -reference.fit.estimate[j], 1e-8, reference.fit.term[j]),
    );
    [errors.intercept, ...errors.coefficients].forEach((value, j) =>
      expectNear(value, reference.fit.se[j], 1e-8, reference.fit.term[j]),
    );
    expectNear(fit.deviance, reference.fit.deviance, 1e-9 * reference.fit.deviance);
    expectNear(-fit.deviance / 2, reference.fit.loglik, 1e-8);
    expectNear(nullDeviance(problem), reference.fit.null_deviance, 1e-8);
    expectNear(fit.deviance + 2 * 21, reference.fit.aic, 1e-8);
    // Signs and sides turn with the event.
    const reach = normalQuantile(0.975);
    [fit.intercept, ...fit.coefficients].forEach((value, j) => {
      const error = j === 0 ? errors.intercept : errors.coefficients[j - 1];
      expectNear(value / error, -reference.fit.z[j], 1e-7, reference.fit.term[j]);
      expectNear(-(value + reach * error), reference.wald_ci95.lower[j], 1e-7, reference.fit.term[j]);
      expectNear(-(value - reach * error), reference.wald_ci95.upper[j], 1e-7, reference.fit.term[j]);
      expectNear(
        errors.covariance[j][j],
        reference.vcov_diag[j],
        1e-8 * Math.max(1, reference.vcov_diag[j]),
        reference.fit.term[j],
      );
    });
    // Inflation by the fit's own weighting: the inverse of the correlation of the estimates, intercept left out.
    const correlations = names.map((_, j) =>
      names.map((__, k) => errors.covariance[j + 1][k + 1] / (errors.coefficients[j] * errors.coefficients[k])),
    );
    const inflation = inverse(new Matrix(correlations));
    names.forEach((name, j) => expectNear(inflation.get(j, j), reference.vif_from_glm_vcov.value[name], 1e-8, name));
  });

  it('has the classical variance inflation factors', () => {
    const inflation = varianceInflation(columns);
    names.forEach((name, j) => expectNear(inflation[j], reference.vif_classical.value[name], 1e-9, name));
    // The file states the ratio of extreme eigenvalues; the condition index is its square root.
    expectNear(conditionIndex(columns).largest ** 2, reference.corr_condition_number, 1e-9);
  });

  it('is confirmed by a library that shares nothing with this one', () => {
    // ml-logistic-regression 2.0.0, plain gradient descent; 1e-3 is what it is asked for, four characteristics keep it quick.
    const small = { ...problem, columns: columns.slice(0, 4) };
    const own = fitAt(small, 0);
    const foreign = fitForeignChallenger(small, { steps: 600 });
    expectNear(foreign.intercept, own.intercept, 1e-3);
    own.coefficients.forEach((value, j) => expectNear(foreign.coefficients[j], value, 1e-3, names[j]));
  });
});

it('reads every figure of german_woe_bins', () =>
  expectAllRead('german_woe_bins.json', { 'variables/*/spec/missing': 'no characteristic has a missing value' }));

it('reads every figure of german_woe_glm_vif', () => expectAllRead('german_woe_glm_vif.json'));
