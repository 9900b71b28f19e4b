import { describe, expect, it } from 'vitest';
import {
  auc,
  brier,
  crossValidate,
  fastCrossValidation,
  fitPath,
  probabilitiesOfBad,
  type FitProblem,
} from '@tallystone/numeric';
import { tableOf } from './penalised-fits';
import { expectAllRead, expectNear, expected } from './reference-files';

interface Case {
  readonly data: string;
  readonly x: string[];
  readonly y: string;
  readonly alpha: number;
  readonly standardize: boolean;
  readonly weights: string;
  readonly folds: string;
  readonly lambda: number[];
  readonly fold_weight: number[];
  readonly cvm_deviance: number[];
  readonly cvsd_deviance: number[];
  readonly fold_deviance_at_min: number[];
  readonly fold_deviance_at_1se: number[];
  readonly index_min_1based: number;
  readonly index_1se_1based: number;
  readonly lambda_min: number;
  readonly lambda_1se: number;
  readonly nonzero_full_fit: number[];
  readonly cvm_brier: number[];
  readonly cvm_misclass: number[];
  readonly cvm_auc_foldmean: number[];
  readonly cvsd_auc_foldmean: number[];
  readonly index_max_auc_1based: number;
  readonly auc_pooled_out_of_fold: number[];
}

/** "((i-1) mod K)+1" or "ceil(i*K/n)" for the 1-based row i. */
function foldsOf(rule: string, rows: number): Uint8Array {
  const cyclic = /\(\(i-1\) mod (\d+)\)\+1/.exec(rule);
  if (cyclic) return Uint8Array.from({ length: rows }, (_, i) => (i % Number(cyclic[1])) + 1);
  const blocks = /ceil\(i\*(\d+)\/n\)/.exec(rule);
  if (blocks) return Uint8Array.from({ length: rows }, (_, i) => Math.ceil(((i + 1) * Number(blocks[1])) / rows));
  throw new Error(rule);
}

describe('cross-validation against cv.glmnet 4.1-6 and a manual fold loop', () => {
  // Source: expected/cross_validation.json (its two methods agree to 4e-12), generators/cross_validation.R. Folds are solved to a residual of
  // 1e-7; the fold deviance is smooth in the coefficients, hence 1e-6.
  const { cases } = expected<{ cases: Record<string, Case> }>('cross_validation.json');
  it('has six cases', () => expect(Object.keys(cases)).toHaveLength(6));

  for (const [name, reference] of Object.entries(cases)) {
    it(name, () => {
      const table = tableOf(reference.data);
      const outcome = table.goods(reference.y);
      const weights = reference.weights === 'all 1' ? undefined : Float64Array.from(outcome, (_, i) => ((i + 1) % 3) + 1);
      const problem: FitProblem = {
        columns: reference.x.map((column) => table.numbers(column)),
        outcome,
        weights,
        penalty: { mixing: reference.alpha, standardize: reference.standardize },
      };
      const folds = foldsOf(reference.folds, outcome.length);
      const full = fitPath(problem, { lambdas: reference.lambda });
      expect(full.fits.map((fit) => fit.coefficients.filter((b) => b !== 0).length)).toEqual([...reference.nonzero_full_fit]);
      const outOfFold = reference.lambda.map(() => new Float64Array(outcome.length));
      const result = crossValidate(problem, folds, reference.lambda, {
        onFoldFit: (fold, index, _fit, eta) => {
          for (let i = 0; i < eta.length; i++) if (folds[i] === fold) outOfFold[index][i] = eta[i];
        },
      });
      expect(result.converged).toBe(true);
      const fast = fastCrossValidation(problem, folds, reference.lambda, { engineFrom: 0 });
      expect([fast.solver, fast.reason, fast.converged]).toEqual(['engine', null, true]);
      expect([fast.minimum, fast.oneStandardError]).toEqual([result.minimum, result.oneStandardError]);
      fast.folds.forEach((fold, k) =>
        reference.lambda.forEach((lambda, place) =>
          expectNear(fold.deviance[place], result.folds[k].deviance[place], 1e-6, `fold ${k + 1} at ${lambda}`),
        ),
      );
      expect(result.optimalityResidual).toBeLessThanOrEqual(1e-6);
      expect(result.minimum + 1).toBe(reference.index_min_1based);
      expect(result.oneStandardError + 1).toBe(reference.index_1se_1based);
      expectNear(result.lambdas[result.minimum], reference.lambda_min, 1e-14, 'chosen lambda');
      expectNear(result.lambdas[result.oneStandardError], reference.lambda_1se, 1e-14, 'chosen lambda');
      expect(result.atGridEnd).toBe([1, reference.lambda.length].includes(reference.index_min_1based));
      result.folds.forEach((fold, k) => {
        expectNear(fold.weight, reference.fold_weight[k], 1e-9, 'fold weight');
        expectNear(fold.deviance[result.minimum], reference.fold_deviance_at_min[k], 1e-6, `fold ${k + 1}`);
        expectNear(fold.deviance[result.oneStandardError], reference.fold_deviance_at_1se[k], 1e-6, `fold ${k + 1}`);
      });
      reference.lambda.forEach((lambda, k) => {
        for (const { mean, standardError } of [result, fast]) {
          expectNear(mean[k], reference.cvm_deviance[k], 1e-6, `mean at ${lambda}`);
          expectNear(standardError[k], reference.cvsd_deviance[k], 1e-6, `standard error at ${lambda}`);
        }
        expectNear(brier(probabilitiesOfBad(outOfFold[k]), outcome, weights), reference.cvm_brier[k], 1e-6, `Brier at ${lambda}`);
      });
      const held = result.folds.map(({ fold }) => Array.from(folds.keys()).filter((i) => folds[i] === fold));
      const total = reference.fold_weight.reduce((sum, w) => sum + w, 0);
      const overFolds = (values: number[]): number =>
        values.reduce((sum, value, k) => sum + reference.fold_weight[k] * value, 0) / total;
      const errorOver = (values: number[]): number => {
        const mean = overFolds(values);
        return Math.sqrt(overFolds(values.map((value) => (value - mean) ** 2)) / (values.length - 1));
      };
      const areas = outOfFold.map((eta, k) => {
        const at = `at ${reference.lambda[k]}`;
        // Where no column is in, folds of one bad rate have one eta up to the last digit: ties that rounding would break.
        const scores = eta.map((value) => Math.round(value * 1e9) / 1e9);
        const misses = outcome.reduce((sum, y, i) => sum + (eta[i] > 0 === (y === 1) ? 0 : (weights?.[i] ?? 1)), 0);
        expectNear(misses / total, reference.cvm_misclass[k], 1e-12, `misclassified ${at}`);
        // The areas of the file are unweighted in every case; only their mean over folds is weighted by fold. Nudge -1: all ties between a good and a
        // bad lost, 0: half of them, 1: all won.
        const area = (rows: number[], nudge = 0): number =>
          auc(
            rows.map((i) => scores[i] + 1e-10 * nudge * outcome[i]),
            rows.map((i) => outcome[i]),
          );
        // One pair that changes order moves the pooled area by 1/(700 x 300) = 5e-6, hence 1e-5; where no column is in, the reference's own rounding
        // has broken some of the ties between folds.
        const all = Array.from(folds.keys());
        const empty = held.every((rows) => rows.every((i) => scores[i] === scores[rows[0]]));
        const [lost, won] = empty ? [area(all, -1), area(all, 1)] : [area(all), area(all)];
        expect(reference.auc_pooled_out_of_fold[k], `pooled AUC ${at}`).toBeGreaterThanOrEqual(lost - 1e-5);
        expect(reference.auc_pooled_out_of_fold[k], `pooled AUC ${at}`).toBeLessThanOrEqual(won + 1e-5);
        const byFold = held.map((rows) => area(rows));
        // In a fold of 70 x 30 pairs one that changes order moves the mean of ten by 5e-5.
        expectNear(overFolds(byFold), reference.cvm_auc_foldmean[k], 5e-5, `AUC by fold ${at}`);
        expectNear(errorOver(byFold), reference.cvsd_auc_foldmean[k], 5e-5, `its standard error ${at}`);
        return overFolds(byFold);
      });
      expect(areas.indexOf(Math.max(...areas)) + 1).toBe(reference.index_max_auc_1based);
    });
  }
});

it('reads every figure of the file', () =>
  expectAllRead('cross_validation.json', {
    'cases/*/max_diff_to_cv.glmnet': 'how well the two programs behind the file agree with one another',
  }));
