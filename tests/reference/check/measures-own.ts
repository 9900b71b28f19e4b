import {
  assignBins,
  auc,
  betaQuantile,
  binomialCriticalCount,
  binomialTail,
  brier,
  calibration,
  chiSquareQuantile,
  chiSquareTail,
  clopperPearson,
  conditionIndex,
  countBins,
  delong,
  fitAt,
  herfindahl,
  hosmerLemeshow,
  jeffreysInterval,
  jeffreysTail,
  kolmogorovCriticalValue,
  kolmogorovSmirnov,
  logLoss,
  murphyDecomposition,
  normalQuantile,
  noncentralChiSquareTail,
  normalTail,
  pairedDelong,
  populationStability,
  quantilesType7,
  rankCorrelation,
  spiegelhalter,
  stabilityCriticalValue,
  stabilitySampling,
  standardErrors,
  varianceInflation,
  weightOfEvidence,
  wilsonInterval,
  type FitProblem,
} from '@tallystone/numeric';
import { EDGES, PENALTY, type Drawn } from './measures-draw';
import type { Answers } from './programs';
import { Largest } from './report';

/** Figures of this library by the names under which the scripts print theirs. */
export function ownFigures(drawn: Drawn): Record<string, ArrayLike<number>> {
  const { y, w, whole, a, b, pd, x, counts, tails } = drawn;
  const areas = { a: delong(a, y), b: delong(b, y) };
  const paired = pairedDelong(a, b, y);
  const line = (weights?: Float64Array): number[] => {
    const own = calibration(pd, y, weights);
    return [
      own.inTheLarge,
      own.inTheLargeStandardError,
      own.slope,
      own.slopeStandardError,
      own.intercept,
      own.interceptStandardError,
    ];
  };
  const onDevelopment = hosmerLemeshow(pd, y, { development: true });
  const elsewhere = hosmerLemeshow(pd, y, { development: false });
  const murphy = murphyDecomposition(pd, y, w);
  const woe = (closed: 'left' | 'right', amount: number): number[] => {
    const { goods, bads } = countBins(assignBins(a, EDGES, closed), y, EDGES.length + 1);
    const own = weightOfEvidence(goods, bads, { amount, when: amount === 0 ? 'never' : 'always' });
    return [...own.woe, own.informationValue];
  };
  const half = y.length / 2;
  const banded = [a.subarray(0, half), a.subarray(half)].map(
    (part) => countBins(assignBins(part, EDGES, 'left'), new Uint8Array(part.length), EDGES.length + 1).rows,
  );
  const psi = populationStability(banded[0], banded[1]) ?? NaN;
  const plain: FitProblem = { columns: x, outcome: y, weights: whole, penalty: { mixing: 1, standardize: true } };
  const fit = fitAt(plain, 0, { tolerance: 1e-13 });
  const errors = standardErrors(plain, fit);
  const ridge = fitAt({ ...plain, weights: w, penalty: { mixing: 0, standardize: true } }, PENALTY, { tolerance: 1e-13 });
  const limits = (of: (x: number, n: number) => { lower: number; upper: number }): number[] => {
    const found = counts.map((each) => of(each.x, each.n));
    return [...found.map(({ lower }) => lower), ...found.map(({ upper }) => upper)];
  };
  const pairs = (of: (x: number, n: number) => { lower: number; upper: number }): number[] =>
    counts.flatMap((each) => {
      const { lower, upper } = of(each.x, each.n);
      return [lower, upper];
    });
  return {
    'delong-a': [areas.a.auc, areas.a.standardError, areas.a.lower, areas.a.upper],
    'delong-b': [areas.b.auc, areas.b.standardError, areas.b.lower, areas.b.upper],
    'ks-a': [kolmogorovSmirnov(a, y).ks],
    'ks-b': [kolmogorovSmirnov(b, y).ks],
    paired: [paired.z, paired.pValue, paired.covariance[0][1]],
    spearman: [rankCorrelation(a, b), rankCorrelation(a, pd)],
    'quantiles-a': quantilesType7(
      a,
      Array.from({ length: 21 }, (_, k) => k / 20),
    ),
    'quantiles-b': quantilesType7(b, [0, 0.001, 0.137, 0.5, 0.999, 1]),
    calibration: line(),
    'calibration-weighted': line(w),
    'hosmer-lemeshow': [onDevelopment.statistic, onDevelopment.groups, onDevelopment.pValue ?? NaN, elsewhere.pValue ?? NaN],
    murphy: [murphy.reliability, murphy.resolution, murphy.uncertainty],
    spiegelhalter: [spiegelhalter(pd, y).z],
    'woe-right-0': woe('right', 0),
    'woe-right-0.5': woe('right', 0.5),
    'woe-left-0': woe('left', 0),
    'woe-left-0.5': woe('left', 0.5),
    psi: [
      psi,
      stabilitySampling(psi, half, half, EDGES.length + 1).pValue,
      stabilityCriticalValue(half, half, EDGES.length + 1, 0.95),
    ],
    herfindahl: [herfindahl(banded[0].map((rows, k) => rows + banded[1][k])).index],
    vif: varianceInflation(x),
    condition: conditionIndex(x).indices,
    glm: [fit.intercept, ...fit.coefficients, errors.intercept, ...errors.coefficients],
    'clopper-pearson': limits(clopperPearson),
    wilson: limits(wilsonInterval),
    jeffreys: limits(jeffreysInterval),
    'interval-exact': pairs(clopperPearson),
    'interval-wilson': pairs(wilsonInterval),
    'jeffreys-tail': counts.map((each) => jeffreysTail(each.x, each.n, each.p)),
    'binomial-tail': counts.map((each) => binomialTail(each.x, each.n, each.p)),
    'binomial-critical': counts.map(({ n, p }) => binomialCriticalCount(n, p, 0.99)),
    'chi-square-tail': tails.map(({ value, degrees }) => chiSquareTail(value, degrees)),
    'noncentral-chi-square-tail': tails.map(({ value, degrees, probability }) =>
      noncentralChiSquareTail(value, degrees, 10 * probability + value / 2),
    ),
    'chi-square-quantile': tails.map(({ probability, degrees }) => chiSquareQuantile(probability, degrees)),
    'normal-tail': tails.map(({ value }) => normalTail(Math.sqrt(value))),
    'normal-quantile': tails.map(({ probability }) => normalQuantile(probability)),
    'beta-quantile': tails.map(({ probability, degrees, value }) => betaQuantile(probability, degrees, value)),
    'auc-a': [auc(a, y)],
    'auc-b': [auc(b, y)],
    'auc-weighted-a': [auc(a, y, w)],
    'auc-weighted-b': [auc(b, y, w)],
    'ks-weighted-a': [kolmogorovSmirnov(a, y, w).ks],
    'ks-weighted-b': [kolmogorovSmirnov(b, y, w).ks],
    'brier-plain': [brier(pd, y)],
    'brier-weighted': [brier(pd, y, w)],
    'log-loss-plain': [logLoss(pd, y)],
    'log-loss-weighted': [logLoss(pd, y, w)],
    ridge: [ridge.intercept, ...ridge.coefficients],
  };
}

/** What is measured and how near it has to be: absolute, or relative to the figure itself. */
const titles: Record<string, { title: string; tolerance: number; relative?: boolean }> = {
  'delong-a': { title: 'AUC, DeLong error and interval, ties', tolerance: 1e-12 },
  'delong-b': { title: 'AUC, DeLong error and interval', tolerance: 1e-12 },
  paired: { title: 'paired DeLong: z, p-value, covariance', tolerance: 1e-10 },
  'ks-a': { title: 'KS, ties', tolerance: 1e-12 },
  'ks-b': { title: 'KS', tolerance: 1e-12 },
  spearman: { title: "Spearman's rank correlation, ties", tolerance: 1e-13 },
  'quantiles-a': { title: 'quantiles of type 7, ties', tolerance: 1e-12 },
  'quantiles-b': { title: 'quantiles of type 7', tolerance: 1e-12 },
  // R's glm stops at a relative change of its deviance; its last Newton step is far smaller.
  calibration: { title: 'calibration in the large, slope, errors', tolerance: 1e-7 },
  'calibration-weighted': { title: 'calibration, weighted', tolerance: 1e-7 },
  'hosmer-lemeshow': { title: 'Hosmer-Lemeshow, ties kept', tolerance: 1e-9 },
  murphy: { title: 'Murphy decomposition, weighted', tolerance: 1e-12 },
  spiegelhalter: { title: "Spiegelhalter's z", tolerance: 1e-11 },
  'woe-right-0': { title: 'WOE and IV, right-closed', tolerance: 1e-12 },
  'woe-right-0.5': { title: 'WOE and IV, right-closed, smoothed', tolerance: 1e-12 },
  'woe-left-0': { title: 'WOE and IV, left-closed', tolerance: 1e-12 },
  'woe-left-0.5': { title: 'WOE and IV, left-closed, smoothed', tolerance: 1e-12 },
  psi: { title: 'PSI with its sampling law', tolerance: 1e-11 },
  herfindahl: { title: 'Herfindahl index', tolerance: 1e-12 },
  vif: { title: 'variance inflation', tolerance: 1e-10, relative: true },
  condition: { title: 'condition indices', tolerance: 1e-10, relative: true },
  glm: { title: 'unpenalised fit with standard errors', tolerance: 1e-7 },
  'clopper-pearson': { title: 'Clopper-Pearson intervals', tolerance: 1e-10 },
  wilson: { title: 'Wilson intervals', tolerance: 1e-10 },
  jeffreys: { title: 'Jeffreys intervals', tolerance: 1e-10 },
  'interval-exact': { title: 'Clopper-Pearson intervals', tolerance: 1e-10 },
  'interval-wilson': { title: 'Wilson intervals', tolerance: 1e-10 },
  'jeffreys-tail': { title: 'Jeffreys test', tolerance: 1e-9, relative: true },
  'binomial-tail': { title: 'binomial tail', tolerance: 1e-9, relative: true },
  'binomial-critical': { title: 'binomial critical count', tolerance: 0 },
  'chi-square-tail': { title: 'chi-square tail', tolerance: 1e-10, relative: true },
  // R's own precision of noncentral tails is absolute, 1e-12.
  'noncentral-chi-square-tail': { title: 'noncentral chi-square tail', tolerance: 1e-10 },
  'chi-square-quantile': { title: 'chi-square quantile', tolerance: 1e-10, relative: true },
  'normal-tail': { title: 'normal tail', tolerance: 1e-12, relative: true },
  'normal-quantile': { title: 'normal quantile', tolerance: 1e-13 },
  'beta-quantile': { title: 'beta quantile', tolerance: 1e-9, relative: true },
  'auc-a': { title: 'AUC, ties', tolerance: 1e-12 },
  'auc-b': { title: 'AUC', tolerance: 1e-12 },
  'auc-weighted-a': { title: 'AUC, weighted, ties', tolerance: 1e-12 },
  'auc-weighted-b': { title: 'AUC, weighted', tolerance: 1e-12 },
  'ks-weighted-a': { title: 'KS, weighted, ties', tolerance: 1e-12 },
  'ks-weighted-b': { title: 'KS, weighted', tolerance: 1e-12 },
  'brier-plain': { title: 'Brier score', tolerance: 1e-12 },
  'brier-weighted': { title: 'Brier score, weighted', tolerance: 1e-12 },
  'log-loss-plain': { title: 'logarithmic loss', tolerance: 1e-12 },
  'log-loss-weighted': { title: 'logarithmic loss, weighted', tolerance: 1e-12 },
  ridge: { title: 'L2 fit, weighted', tolerance: 1e-8 },
};

/** One comparison: what was measured, how far it is from the answer, how far it may be. */
export interface Comparison {
  readonly key: string;
  readonly title: string;
  readonly difference: number;
  readonly tolerance: number;
}

/** Compares every answer of a script with the figure of this library that has its name. */
export function compare(drawn: Drawn, own: Record<string, ArrayLike<number>>, answers: Answers): Comparison[] {
  return [...answers].map(([key, wanted]) => {
    const largest = new Largest();
    if (key === 'kolmogorov') {
      // The distances whose tail probability the other program gives come back as critical values; below 1e-12 nothing is left to invert.
      drawn.tails.forEach(({ value }, i) => {
        if (wanted[i] > 1e-12 && wanted[i] < 0.999) largest.see(kolmogorovCriticalValue(wanted[i]), value / 20);
      });
      return { key, title: 'Kolmogorov critical values', difference: largest.value, tolerance: 1e-8 };
    }
    const { title, tolerance, relative } = titles[key];
    // Below 1e-300 a double runs out of digits.
    largest.all(own[key], wanted, relative ? (value) => Math.max(Math.abs(value), 1e-300) : undefined);
    return { key, title, difference: largest.value, tolerance };
  });
}
