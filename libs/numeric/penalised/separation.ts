import { factorise, solveFactorised } from './cholesky';

interface Unpenalised {
  readonly columns: readonly Float64Array[];
  readonly centre: Float64Array;
  readonly scale: Float64Array;
  /** Room left for each scaled coefficient before its limits. */
  readonly lower: Float64Array;
  readonly upper: Float64Array;
  readonly gradient: Float64Array;
  readonly gradientOfIntercept: number;
  /** Gram matrix at the present point, the intercept first. */
  readonly gram: Float64Array;
  readonly outcome: Uint8Array;
  readonly share: Float64Array;
}

/** A Newton step of this length in eta at a point whose gradient is all but zero can only come from a vanished curvature. */
const LONG_STEP = 0.01;

/**
 * What lets columns that depend on each other be factorised, relative to the diagonal. The larger is safe from rounding; but far out, where the rows of a
 * bin have a curvature below it, it makes the long step short: there the smaller one tells, which rounding still leaves a thousandfold.
 */
const RIDGES = [1e-9, 1e-13] as const;

/**
 * Whether goods and bads are separated along unpenalised columns, so that no finite optimum exists: the Newton step there is long although the
 * gradient is all but zero, no row's loss rises along it, and no limit stands in its way.
 * Source: A. Albert and J. A. Anderson, On the existence of maximum likelihood estimates in logistic regression models, Biometrika 71, 1984.
 */
export function isSeparated(at: Unpenalised): boolean {
  return RIDGES.some((ridge) => isSeparatedAt(at, ridge));
}

function isSeparatedAt(at: Unpenalised, ridge: number): boolean {
  const size = at.columns.length + 1;
  const factor = at.gram.slice();
  for (let a = 0; a < size; a++) factor[a * size + a] *= 1 + ridge;
  if (!factorise(factor, size)) return false;
  const step = Float64Array.of(-at.gradientOfIntercept, ...at.gradient.map((g) => -g));
  solveFactorised(factor, size, step);
  const change = new Float64Array(at.outcome.length).fill(step[0]);
  at.columns.forEach((column, j) => {
    const slope = step[j + 1] / at.scale[j];
    for (let i = 0; i < change.length; i++) change[i] += slope * (column[i] - at.centre[j]);
  });
  let longest = 0;
  for (let i = 0; i < change.length; i++) if (at.share[i] > 0) longest = Math.max(longest, Math.abs(change[i]));
  if (longest < LONG_STEP) return false;
  for (let j = 1; j < size; j++) {
    const room = step[j] > 0 ? at.upper[j - 1] : at.lower[j - 1];
    if (Number.isFinite(room) && Math.abs(step[j]) > 1e-3 * longest) return false;
  }
  for (let i = 0; i < change.length; i++) {
    if (at.share[i] === 0) continue;
    const gain = at.outcome[i] === 1 ? change[i] : -change[i];
    if (gain < -1e-3 * longest) return false;
  }
  return true;
}
