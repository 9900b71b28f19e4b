import { requireFinite, requireOutcome, requireSameLength, requireWeights } from '../checks';

/**
 * The logistic loss of y = 1 good: log(1 + e^eta) - y eta, with log(1 + e^x) as max(x, 0) + log1p(e^-|x|) so that no exponential overflows.
 */

/** P(good) = 1/(1 + e^-eta), exact in both tails; NaN for NaN. @example probabilityOfGood(0) // 0.5 */
export function probabilityOfGood(eta: number): number {
  const small = Math.exp(-Math.abs(eta));
  return eta >= 0 ? 1 / (1 + small) : small / (1 + small);
}

/** PD = 1/(1 + e^eta), exact in both tails; NaN for NaN. @example probabilityOfBad(0) // 0.5 */
export function probabilityOfBad(eta: number): number {
  return probabilityOfGood(-eta);
}

/**
 * PDs of a linear predictor.
 * @param eta n values of ln(good:bad)
 * @returns n probabilities of bad
 * @throws NumericError for NaN and infinite values (names the row)
 * @example probabilitiesOfBad([0, 2]) // [0.5, 0.1192]
 */
export function probabilitiesOfBad(eta: ArrayLike<number>): Float64Array {
  requireFinite('eta', eta);
  const probabilities = new Float64Array(eta.length);
  for (let i = 0; i < probabilities.length; i++) probabilities[i] = probabilityOfBad(eta[i]);
  return probabilities;
}

/**
 * Weighted mean loss at eta; writes share_i (P(good)_i - y_i), the gradient for eta_i, into `residual`.
 * @param share weights divided by their sum
 */
export function lossAndResidual(eta: Float64Array, outcome: Uint8Array, share: Float64Array, residual: Float64Array): number {
  let loss = 0;
  for (let i = 0; i < eta.length; i++) {
    const s = share[i];
    if (s === 0) {
      residual[i] = 0;
      continue;
    }
    const value = eta[i];
    const magnitude = value < 0 ? -value : value;
    const small = Math.exp(-magnitude);
    const inverse = 1 / (1 + small);
    const good = outcome[i];
    residual[i] = s * ((value >= 0 ? inverse : small * inverse) - good);
    // max(eta, 0) - y eta is |eta| where the sign of eta disagrees with the outcome and 0 where it agrees.
    const wrong = value > 0 === (good === 1) ? 0 : magnitude;
    loss += s * (wrong + Math.log1p(small));
  }
  return loss;
}

/** Smallest curvature of a row that the model matrix uses: keeps rows with P near 0 or 1 from making it singular. */
const CURVATURE_FLOOR = 1e-10;

/** sqrt(share_i P_i (1 - P_i)): the square roots of the rows' curvatures. */
export function rootCurvature(eta: Float64Array, share: Float64Array, root: Float64Array): void {
  for (let i = 0; i < eta.length; i++) {
    if (share[i] === 0) {
      root[i] = 0;
      continue;
    }
    const small = Math.exp(-Math.abs(eta[i]));
    const inverse = 1 / (1 + small);
    root[i] = Math.sqrt(share[i] * Math.max(small * inverse * inverse, CURVATURE_FLOOR));
  }
}

/**
 * Deviance: 2 sum w_i [log(1 + e^eta_i) - y_i eta_i], weights as given (not normalised).
 * @param outcome n values, 1 good, 0 bad
 * @param eta n values of ln(good:bad)
 * @param weights n weights of at least 0; absent = 1 each
 * @throws NumericError for different lengths, NaN (names its row), weights that are negative or add up to 0
 * @example deviance(Uint8Array.of(1, 0), Float64Array.of(0, 0)) // 2.7726, four times ln two
 */
export function deviance(outcome: Uint8Array, eta: Float64Array, weights?: Float64Array): number {
  requireSameLength('eta', eta.length, outcome.length);
  requireOutcome(outcome);
  requireFinite('eta', eta);
  if (weights) {
    requireSameLength('weights', weights.length, outcome.length);
    requireWeights('weights', weights);
  }
  let sum = 0;
  for (let i = 0; i < eta.length; i++) {
    const weight = weights ? weights[i] : 1;
    if (weight !== 0) sum += weight * rowLoss(eta[i], outcome[i]);
  }
  return 2 * sum;
}

/** log(1 + e^eta) - y eta of one row. */
export function rowLoss(eta: number, good: number): number {
  const magnitude = Math.abs(eta);
  return (eta > 0 === (good === 1) ? 0 : magnitude) + Math.log1p(Math.exp(-magnitude));
}
