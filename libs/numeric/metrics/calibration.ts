import { requireFinite, requireThat } from '../checks';
import { chiSquareTail } from '../distributions/tails';
import { NumericError } from '../errors';
import { quantilesType7, requireBothClasses } from './ordering';
import { requireForecast } from './probability-scores';

export interface HosmerLemeshowGroup {
  /** PDs of the group lie in (lower, upper]; the first group holds its lower end too. */
  readonly lower: number;
  readonly upper: number;
  readonly rows: number;
  readonly bads: number;
  readonly expectedBads: number;
}

export interface HosmerLemeshow {
  readonly statistic: number;
  /** Groups after merging equal edges. */
  readonly groups: number;
  readonly degreesOfFreedom: number;
  /** null when no degree of freedom is left. */
  readonly pValue: number | null;
  readonly table: readonly HosmerLemeshowGroup[];
}

/** The group of a PD: the first whose upper edge it does not pass. */
function groupOf(pd: number, edges: readonly number[]): number {
  let low = 0;
  let high = Math.max(0, edges.length - 2);
  while (low < high) {
    const middle = (low + high) >> 1;
    if (pd <= edges[middle + 1]) high = middle;
    else low = middle + 1;
  }
  return low;
}

/** Edges without those that are the upper end of a group that no row lies in. */
function withoutEmpty(edges: readonly number[], pd: ArrayLike<number>): number[] {
  const filled = new Set(Array.from(pd, (value) => groupOf(value, edges)));
  return edges.filter((_, i) => i === 0 || filled.has(i - 1));
}

/**
 * Hosmer and Lemeshow's test: groups by type 7 quantiles of PD, right-closed, equal edges merged, rows of equal PD kept together; statistic
 * sum (O - E)^2 / (E (1 - E/n)). A quantile can fall between two neighbouring PDs and cut off a stretch without rows, which joins the group above
 * it. Degrees of freedom are G - 2 on the rows the model was developed on and G on others, G counted after merging.
 * @param pd n probabilities of bad
 * @param outcome n values, 1 good, 0 bad
 * @param options `groups` asked for, default 10; `development`: whether the model was developed on these rows
 * @returns statistic, groups and p-value (null without a degree of freedom); Infinity where a group that expects no bad, or nothing else, is wrong
 * @throws NumericError for a PD outside [0, 1] or NaN (names its row), different lengths, no row, fewer than two groups
 * @example hosmerLemeshow(pd, outcome, { groups: 10, development: true }).degreesOfFreedom // 8
 * Source: D. W. Hosmer and S. Lemeshow, Applied Logistic Regression, Wiley 2000, section 5.2.2.
 */
export function hosmerLemeshow(
  pd: ArrayLike<number>,
  outcome: ArrayLike<number>,
  options: { groups?: number; development: boolean },
): HosmerLemeshow {
  requireForecast(pd, outcome);
  const asked = options.groups ?? 10;
  requireThat(Number.isInteger(asked) && asked >= 2, 'groups', 'at least two groups are needed.');
  const cuts = quantilesType7(
    pd,
    Array.from({ length: asked + 1 }, (_, i) => i / asked),
  );
  const distinct = cuts.filter((cut, i) => i === 0 || cut !== cuts[i - 1]);
  const edges = withoutEmpty(distinct, pd);
  // With a single distinct PD one group is left, both of its ends that PD.
  const groups = Math.max(1, edges.length - 1);
  const rows = new Float64Array(groups);
  const bads = new Float64Array(groups);
  const expected = new Float64Array(groups);
  for (let i = 0; i < pd.length; i++) {
    const group = groupOf(pd[i], edges);
    rows[group] += 1;
    bads[group] += 1 - outcome[i];
    expected[group] += pd[i];
  }
  let statistic = 0;
  const table: HosmerLemeshowGroup[] = [];
  for (let g = 0; g < groups; g++) {
    table.push({
      lower: edges[g],
      upper: edges[Math.min(g + 1, edges.length - 1)],
      rows: rows[g],
      bads: bads[g],
      expectedBads: expected[g],
    });
    const gap = bads[g] - expected[g];
    const variance = expected[g] * (1 - expected[g] / rows[g]);
    if (gap !== 0) statistic += (gap * gap) / variance;
  }
  const degreesOfFreedom = options.development ? groups - 2 : groups;
  const pValue = degreesOfFreedom > 0 ? chiSquareTail(statistic, degreesOfFreedom) : null;
  return { statistic, groups, degreesOfFreedom, pValue, table };
}

export interface Calibration {
  /** a in logit P(bad) = a + logit PD: positive means more bads than predicted. */
  readonly inTheLarge: number;
  readonly inTheLargeStandardError: number;
  /** b and a in logit P(bad) = a + b logit PD. */
  readonly slope: number;
  readonly slopeStandardError: number;
  readonly intercept: number;
  readonly interceptStandardError: number;
  /** Mean PD and bad rate, weighted. */
  readonly meanPd: number;
  readonly badRate: number;
  /**
   * False when the likelihood has no finite optimum (the PDs separate goods from bads) or none at all (every PD is the same): slope, intercept and
   * their errors are NaN then. Calibration in the large is there in any case.
   */
  readonly converged: boolean;
}

interface Normal {
  readonly gradientIntercept: number;
  readonly gradientSlope: number;
  readonly ii: number;
  readonly is: number;
  readonly ss: number;
  readonly loss: number;
}

function normalEquations(
  x: Float64Array,
  bad: Float64Array,
  weights: ArrayLike<number> | undefined,
  a: number,
  b: number,
): Normal {
  let gradientIntercept = 0;
  let gradientSlope = 0;
  let ii = 0;
  let is = 0;
  let ss = 0;
  let loss = 0;
  for (let i = 0; i < x.length; i++) {
    const weight = weights ? weights[i] : 1;
    const eta = a + b * x[i];
    const small = Math.exp(-Math.abs(eta));
    const p = eta >= 0 ? 1 / (1 + small) : small / (1 + small);
    const curvature = (weight * small) / ((1 + small) * (1 + small));
    gradientIntercept += weight * (bad[i] - p);
    gradientSlope += weight * (bad[i] - p) * x[i];
    ii += curvature;
    is += curvature * x[i];
    ss += curvature * x[i] * x[i];
    loss += weight * (Math.max(eta, 0) + Math.log1p(small) - bad[i] * eta);
  }
  return { gradientIntercept, gradientSlope, ii, is, ss, loss };
}

/** Newton steps, halved while the loss rises. `freeSlope` false holds b at 1. */
function calibrationLine(x: Float64Array, bad: Float64Array, weights: ArrayLike<number> | undefined, freeSlope: boolean) {
  let a = 0;
  let b = 1;
  let now = normalEquations(x, bad, weights, a, b);
  let converged = false;
  for (let round = 0; round < 100 && !converged; round++) {
    const determinant = now.ii * now.ss - now.is * now.is;
    const stepA = freeSlope
      ? (now.ss * now.gradientIntercept - now.is * now.gradientSlope) / determinant
      : now.gradientIntercept / now.ii;
    const stepB = freeSlope ? (now.ii * now.gradientSlope - now.is * now.gradientIntercept) / determinant : 0;
    if (!Number.isFinite(stepA) || !Number.isFinite(stepB)) break;
    let scale = 1;
    let next = normalEquations(x, bad, weights, a + stepA, b + stepB);
    while (next.loss > now.loss + 1e-12 * Math.abs(now.loss) && scale > 1e-6) {
      scale /= 2;
      next = normalEquations(x, bad, weights, a + scale * stepA, b + scale * stepB);
    }
    a += scale * stepA;
    b += scale * stepB;
    now = next;
    converged = Math.abs(stepA) + Math.abs(stepB) <= 1e-12 * (1 + Math.abs(a) + Math.abs(b));
  }
  const determinant = now.ii * now.ss - now.is * now.is;
  return {
    a,
    b,
    converged: converged && Math.abs(b) < 1e6,
    errorA: freeSlope ? Math.sqrt(now.ss / determinant) : 1 / Math.sqrt(now.ii),
    errorB: freeSlope ? Math.sqrt(now.ii / determinant) : 0,
  };
}

/**
 * Calibration in the large, calibration slope and intercept, with model standard errors (weights count as repeated rows).
 * @param pd n probabilities of bad, all strictly between 0 and 1
 * @param outcome n values, 1 good, 0 bad
 * @param weights n weights of at least 0; absent = 1 each
 * @throws NumericError for a PD of 0 or 1 (names its row), one class only
 * @example calibration(pd, outcome).slope // 1 on the rows an unpenalised model was developed on
 * Source: D. R. Cox, Two further applications of a model for binary regression, Biometrika 45, 1958.
 */
export function calibration(pd: ArrayLike<number>, outcome: ArrayLike<number>, weights?: ArrayLike<number>): Calibration {
  const total = requireForecast(pd, outcome, weights);
  const x = new Float64Array(pd.length);
  const bad = new Float64Array(pd.length);
  let bads = 0;
  let meanPd = 0;
  for (let i = 0; i < pd.length; i++) {
    if (pd[i] === 0 || pd[i] === 1)
      throw new NumericError('out-of-range', `pd is ${pd[i]} at index ${i}; its logit is infinite.`, { name: 'pd', index: i });
    x[i] = Math.log(pd[i]) - Math.log1p(-pd[i]);
    bad[i] = 1 - outcome[i];
    const weight = weights ? weights[i] : 1;
    bads += weight * bad[i];
    meanPd += weight * pd[i];
  }
  requireBothClasses(total - bads, bads);
  const large = calibrationLine(x, bad, weights, false);
  const line = calibrationLine(x, bad, weights, true);
  const counts = (i: number): boolean => !weights || weights[i] > 0;
  const first = x.findIndex((_, i) => counts(i));
  const spread = x.some((value, i) => counts(i) && value !== x[first]);
  const converged = spread && large.converged && line.converged;
  return {
    inTheLarge: large.a,
    inTheLargeStandardError: large.errorA,
    slope: converged ? line.b : NaN,
    slopeStandardError: converged ? line.errorB : NaN,
    intercept: converged ? line.a : NaN,
    interceptStandardError: converged ? line.errorA : NaN,
    meanPd: meanPd / total,
    badRate: bads / total,
    converged,
  };
}

/**
 * Intercept of ln(good:bad) moved from the sample's bad rate to the population's:
 * b0* = b0 + ln{ [(1-t)/t] [y/(1-y)] }, t population and y sample bad rate.
 * @param intercept b0 of the model of ln(good:bad)
 * @param sampleBadRate and populationBadRate strictly between 0 and 1
 * @throws NumericError for rates outside, and for NaN
 * @example priorCorrectedIntercept(0.85, 0.3, 0.05) // 2.9471
 * Source: G. King and L. Zeng, Political Analysis 9(2):137-163, 2001, eq. (7), signs changed for ln(good:bad) (formula from memory).
 */
export function priorCorrectedIntercept(intercept: number, sampleBadRate: number, populationBadRate: number): number {
  requireFinite('intercept', [intercept]);
  requireThat(sampleBadRate > 0 && sampleBadRate < 1, 'sampleBadRate', 'a bad rate lies strictly between 0 and 1.');
  requireThat(populationBadRate > 0 && populationBadRate < 1, 'populationBadRate', 'a bad rate lies strictly between 0 and 1.');
  return intercept + Math.log(((1 - populationBadRate) / populationBadRate) * (sampleBadRate / (1 - sampleBadRate)));
}
