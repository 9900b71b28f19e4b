import type { Penalty } from '../penalised/problem';
import type { CodedProblem } from './coded-columns';
import type { Layout } from './layout';

/**
 * How the columns look to the lanes of some rows. A coordinate t_j belongs to z_j = (x_j - centre_j) / scale_j, so b_j = t_j / scale_j. Centre and
 * scale are those of all rows, so that lanes share tables and curvature; what differs for the lane's own rows, their standard deviation, enters the
 * penalty: with a_j = (own deviation of z_j), lambda m_j [mixing a_j |t_j| + (1 - mixing)/2 a_j^2 t_j^2].
 * Arrays are by internal column.
 */
export interface Standardisation {
  readonly centre: Float64Array;
  readonly scale: Float64Array;
  /** z by bin, over all bins of coded columns. */
  readonly values: Float64Array;
  /** 1 where the column varies over the lane's rows. */
  readonly used: Uint8Array;
  /** Penalty per unit of lambda, and limits, on t. */
  readonly absolute: Float64Array;
  readonly square: Float64Array;
  readonly lower: Float64Array;
  readonly upper: Float64Array;
  /** From a violation in t to the one that is reported. */
  readonly reporting: Float64Array;
  /** Multiplier of each column, for the largest lambda. */
  readonly multipliers: Float64Array;
  readonly totalWeight: number;
}

export interface WeightSums {
  /** By bin. */
  readonly bins: ArrayLike<number>;
  /** w z and w z^2 by linear column. */
  readonly linear: ArrayLike<number>;
  readonly total: number;
}

/** Sums of weights over the folds that `takes` accepts. */
export function weightSums(layout: Layout, takes: (fold: number) => boolean): WeightSums {
  const bins = new Float64Array(layout.bins);
  const linear = new Float64Array(layout.linear * 2);
  let total = 0;
  for (let fold = 0; fold < layout.folds; fold++) {
    if (!takes(fold)) continue;
    total += layout.foldWeights[fold];
    for (let b = 0; b < bins.length; b++) bins[b] += layout.binWeights[fold * layout.bins + b];
    for (let k = 0; k < linear.length; k++) linear[k] += layout.linearMoments[fold * linear.length + k];
  }
  return { bins, linear, total };
}

/** The standardisation of all rows, by which tables and curvature are made. */
export function fullStandardisation(problem: CodedProblem, layout: Layout): Standardisation {
  return fromTables(
    problem,
    layout,
    weightSums(layout, () => true),
    (source) => problem.columns[source].values,
  );
}

/**
 * The standardisation of columns whose values by code are `valuesOf(source)`, centred and scaled by the rows that `sums` counts: of all rows, or of a
 * fold whose weights of evidence come from its own training rows.
 */
export function fromTables(
  problem: CodedProblem,
  layout: Layout,
  sums: WeightSums,
  valuesOf: (source: number) => ArrayLike<number>,
): Standardisation {
  const count = layout.columns.length;
  const centre = new Float64Array(count);
  const scale = new Float64Array(count);
  const values = new Float64Array(layout.bins);
  layout.columns.forEach(({ source, firstBin, bins }, j) => {
    if (firstBin < 0) {
      const k = j - layout.coded;
      centre[j] = layout.linearCentre[k];
      scale[j] = layout.linearScale[k];
      return;
    }
    const own = valuesOf(source);
    const moments = momentsOf(own, sums.bins, firstBin, bins, sums.total);
    centre[j] = moments.mean;
    scale[j] = moments.deviation;
    for (let b = 0; b < bins; b++) values[firstBin + b] = scale[j] > 0 ? (own[b] - centre[j]) / scale[j] : 0;
  });
  const penalised = withPenalty(problem.penalty, layout, scale, ownDeviations(layout, values, scale, sums));
  return { centre, scale, values, ...penalised, totalWeight: sums.total };
}

/** The lane's view of `full`: the same tables and curvature, its own deviations. */
export function ownStandardisation(
  problem: CodedProblem,
  layout: Layout,
  full: Standardisation,
  sums: WeightSums,
): Standardisation {
  const own = withPenalty(problem.penalty, layout, full.scale, ownDeviations(layout, full.values, full.scale, sums));
  return { ...full, ...own, totalWeight: sums.total };
}

function ownDeviations(layout: Layout, values: Float64Array, scale: Float64Array, sums: WeightSums): Float64Array {
  return Float64Array.from(layout.columns, ({ firstBin, bins }, j) => {
    if (!(scale[j] > 0)) return 0;
    if (firstBin >= 0)
      return momentsOf(values.subarray(firstBin, firstBin + bins), sums.bins, firstBin, bins, sums.total).deviation;
    const k = (j - layout.coded) * 2;
    const mean = sums.linear[k] / sums.total;
    const variance = sums.linear[k + 1] / sums.total - mean * mean;
    // Values are centred and scaled by all rows, so a variance this small is rounding.
    return variance > 1e-13 ? Math.sqrt(variance) : 0;
  });
}

function momentsOf(
  values: ArrayLike<number>,
  weights: ArrayLike<number>,
  firstBin: number,
  bins: number,
  total: number,
): { mean: number; deviation: number } {
  let first = NaN;
  let varies = false;
  let mean = 0;
  for (let b = 0; b < bins; b++) {
    const w = weights[firstBin + b];
    if (!(w > 0)) continue;
    if (first !== first) first = values[b];
    else if (values[b] !== first) varies = true;
    mean += w * (values[b] - first);
  }
  mean = first + mean / total;
  if (!varies) return { mean: first === first ? mean : 0, deviation: 0 };
  // Squared as shares of the largest distance: on scales of 1e-300 or 1e300 the squares themselves would vanish or overflow.
  let furthest = 0;
  for (let b = 0; b < bins; b++) if (weights[firstBin + b] > 0) furthest = Math.max(furthest, Math.abs(values[b] - mean));
  if (!(furthest > 0)) return { mean, deviation: 0 };
  let variance = 0;
  for (let b = 0; b < bins; b++) {
    const w = weights[firstBin + b];
    const share = (values[b] - mean) / furthest;
    if (w > 0) variance += w * share * share;
  }
  return { mean, deviation: furthest * Math.sqrt(variance / total) };
}

function withPenalty(penalty: Penalty, layout: Layout, scale: Float64Array, deviations: Float64Array) {
  const count = layout.columns.length;
  const used = new Uint8Array(count);
  const absolute = new Float64Array(count);
  const square = new Float64Array(count);
  const lower = new Float64Array(count).fill(-Infinity);
  const upper = new Float64Array(count).fill(Infinity);
  const reporting = new Float64Array(count).fill(1);
  const multipliers = new Float64Array(count);
  layout.columns.forEach(({ source }, j) => {
    const a = deviations[j];
    if (!(a > 0)) return;
    used[j] = 1;
    const multiplier = penalty.multipliers ? penalty.multipliers[source] : 1;
    multipliers[j] = multiplier;
    // The penalty is on t a when standardising and on t / scale when not.
    const unit = penalty.standardize ? a : 1 / scale[j];
    absolute[j] = multiplier * penalty.mixing * unit;
    square[j] = multiplier * (1 - penalty.mixing) * unit * unit;
    reporting[j] = 1 / unit;
    if (penalty.lower) lower[j] = penalty.lower[source] * scale[j];
    if (penalty.upper) upper[j] = penalty.upper[source] * scale[j];
  });
  return { used, absolute, square, lower, upper, reporting, multipliers };
}
