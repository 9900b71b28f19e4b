import { describe, expect, it } from 'vitest';
import { auc, brier, crossValidate, probabilitiesOfBad, type FitProblem } from '@tallystone/numeric';
import { tableOf } from './penalised-fits';
import { expectNear, expected } from './reference-files';

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
  readonly cvm_brier: number[];
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
      const outOfFold = reference.lambda.map(() => new Float64Array(outcome.length));
      const result = crossValidate(problem, folds, reference.lambda, {
        onFoldFit: (fold, index, _fit, eta) => {
          for (let i = 0; i < eta.length; i++) if (folds[i] === fold) outOfFold[index][i] = eta[i];
        },
      });
      expect(result.converged).toBe(true);
      expect(result.optimalityResidual).toBeLessThanOrEqual(1e-6);
      expect(result.minimum + 1).toBe(reference.index_min_1based);
      expect(result.oneStandardError + 1).toBe(reference.index_1se_1based);
      expect(result.atGridEnd).toBe([1, reference.lambda.length].includes(reference.index_min_1based));
      result.folds.forEach((fold, k) => {
        expectNear(fold.weight, reference.fold_weight[k], 1e-9, 'fold weight');
        expectNear(fold.deviance[result.minimum], reference.fold_deviance_at_min[k], 1e-6, `fold ${k + 1}`);
        expectNear(fold.deviance[result.oneStandardError], reference.fold_deviance_at_1se[k], 1e-6, `fold ${k + 1}`);
      });
      reference.lambda.forEach((lambda, k) => {
        expectNear(result.mean[k], reference.cvm_deviance[k], 1e-6, `mean at ${lambda}`);
        expectNear(result.standardError[k], reference.cvsd_deviance[k], 1e-6, `standard error at ${lambda}`);
        expectNear(brier(probabilitiesOfBad(outOfFold[k]), outcome, weights), reference.cvm_brier[k], 1e-6, `Brier at ${lambda}`);
      });
      // Pooled out-of-fold AUC, unweighted in the reference; one pair that changes order moves it by 1/(700 x 300) = 5e-6, hence 1e-5.
      const at = result.minimum;
      expectNear(auc(outOfFold[at], outcome), reference.auc_pooled_out_of_fold[at], 1e-5, 'pooled AUC');
    });
  }
});
