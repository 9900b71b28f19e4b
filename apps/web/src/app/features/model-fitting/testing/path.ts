import type { FitPath } from '@tallystone/contracts/fits/schema';

/**
 * A small path, written by hand for the specs of this feature: three characteristics, six penalties. "age" enters first, "income" third,
 * "phone" last and against WOE. The minimum lies at index 4, the one-standard-error rule at index 2.
 */
export function smallPath(change: Partial<FitPath> = {}): FitPath {
  const bins = (woe: number[]) => woe.map((value, i) => ({ label: `bin ${i + 1}`, rows: 100, goods: 90, bads: 10, woe: value }));
  const metrics = (auc: number) => ({
    rows: 300,
    goods: 270,
    bads: 30,
    auc,
    aucLower: auc - 0.02,
    aucUpper: auc + 0.02,
    ks: 0.4,
    brier: 0.08,
    calibrationInTheLarge: 0.01,
    calibrationSlope: 1.1,
  });
  const coefficients = [
    [0, 0, 0],
    [0.2, 0, 0],
    [0.5, 0, 0],
    [0.6, 0.1, 0],
    [0.7, 0.2, 0],
    [0.75, 0.25, -0.05],
  ];
  return {
    lambdas: [0.1, 0.05, 0.02, 0.01, 0.005, 0.002],
    intercepts: [2.2, 2.2, 2.21, 2.22, 2.23, 2.23],
    coefficients,
    kept: [0, 1, 1, 2, 2, 3],
    deviance: [200, 195, 190, 186, 184, 183],
    nullDeviance: 200,
    objective: [0.33, 0.33, 0.32, 0.32, 0.31, 0.31],
    optimalityResidual: [1e-12, 1e-12, 1e-12, 1e-12, 1e-12, 1e-12],
    status: ['converged', 'converged', 'converged', 'converged', 'converged', 'converged'],
    largestLambda: 0.1,
    stoppedEarly: false,
    priorCorrection: null,
    characteristics: [
      { column: 'age', label: 'age', kind: 'numeric', treatment: 'free', informationValue: 0.3, bins: bins([-0.5, 0, 0.6]) },
      { column: 'income', label: 'income', kind: 'numeric', treatment: 'free', informationValue: 0.1, bins: bins([-0.2, 0.3]) },
      { column: 'phone', label: 'phone', kind: 'categorical', treatment: 'free', informationValue: 0.01, bins: bins([-0.1, 0.1]) },
    ],
    crossValidation: {
      mean: [0.67, 0.65, 0.631, 0.629, 0.6285, 0.63],
      standardError: [0.01, 0.01, 0.004, 0.004, 0.004, 0.004],
      minimum: 4,
      oneStandardError: 2,
      atGridEnd: false,
      folds: 10,
      classing: 'woe',
    },
    development: coefficients.map((_, i) => metrics(0.7 + i / 100)),
    holdOut: coefficients.map((_, i) => metrics(0.69 + i / 100)),
    outOfTime: null,
    outOfTimeState: 'covered',
    scaling: { pointsToDouble: 25, baseScore: 500, baseOdds: 16, intercept: 'spread', rounding: 'nearest' },
    ...change,
  };
}
