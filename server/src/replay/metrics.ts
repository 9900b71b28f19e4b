import {
  auc,
  brier,
  calibration,
  delong,
  gini,
  hosmerLemeshow,
  kolmogorovSmirnov,
  logLoss,
  probabilitiesOfBad,
} from '@tallystone/numeric';
import type { ResultMetrics } from '@tallystone/contracts/result/types';

export interface MeasuredRows {
  /** ln(good:bad) per row. */
  eta: Float64Array;
  /** Unrounded and rounded scores; rounded null where there is no scorecard. */
  scores: Float64Array;
  rounded: Float64Array | null;
  outcome: Uint8Array;
  weights: Float64Array | null;
  /** Rows the model was developed on: Hosmer-Lemeshow then loses two degrees of freedom. */
  development: boolean;
}

/**
 * All figures of one partition. "path": without DeLong's error and Hosmer-Lemeshow (null), for use at every penalty of a path.
 * @returns null without rows, or with one class only
 */
export function measure(rows: MeasuredRows, figures: 'all' | 'path' = 'all'): ResultMetrics | null {
  const { eta, scores, rounded, outcome, development } = rows;
  const weights = rows.weights ?? undefined;
  if (!hasBothClasses(outcome, rows.weights)) return null;
  const pd = probabilitiesOfBad(eta);
  const area = auc(scores, outcome, weights);
  const calibrated = calibration(pd, outcome, weights);
  const spread = eta.some((value) => value !== eta[0]);
  const usable = spread && calibrated.converged;
  const full = figures === 'all' && rows.weights === null;
  const fit = full ? hosmerLemeshow(pd, outcome, { groups: 10, development }) : null;
  let [total, sum, smallest, largest, largestRounding] = [0, 0, Infinity, -Infinity, 0];
  for (let index = 0; index < scores.length; index++) {
    const weight = rows.weights === null ? 1 : rows.weights[index];
    total += weight;
    sum += weight * scores[index];
    smallest = Math.min(smallest, scores[index]);
    largest = Math.max(largest, scores[index]);
    if (rounded !== null) largestRounding = Math.max(largestRounding, Math.abs(rounded[index] - scores[index]));
  }
  return {
    auc: area,
    aucStandardError: full ? finite(delong(scores, outcome).standardError) : null,
    gini: gini(area),
    ks: kolmogorovSmirnov(scores, outcome, weights).ks,
    brier: brier(pd, outcome, weights),
    logLoss: logLoss(pd, outcome, weights),
    hosmerLemeshow:
      fit === null
        ? null
        : {
            statistic: finite(fit.statistic),
            groups: fit.groups,
            degreesOfFreedom: fit.degreesOfFreedom,
            pValue: fit.pValue === null ? null : finite(fit.pValue),
          },
    calibrationInTheLarge: finite(calibrated.inTheLarge),
    calibrationSlope: usable ? finite(calibrated.slope) : null,
    calibrationIntercept: usable ? finite(calibrated.intercept) : null,
    meanScore: sum / total,
    smallestScore: smallest,
    largestScore: largest,
    aucRounded: rounded === null ? null : auc(rounded, outcome, weights),
    largestRounding: rounded === null ? null : largestRounding,
  };
}

function hasBothClasses(outcome: Uint8Array, weights: Float64Array | null): boolean {
  let [goods, bads] = [false, false];
  for (let index = 0; index < outcome.length && !(goods && bads); index++) {
    if (weights !== null && weights[index] === 0) continue;
    if (outcome[index] === 1) goods = true;
    else bads = true;
  }
  return goods && bads;
}

function finite(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}
