import type { Design } from './design';
import type { Penalty } from './problem';

/**
 * The penalty on the solver's scale, where every coefficient is t_j = b_j s_j. Without standardising the penalty is on b_j = t_j / s_j, so its
 * parts are divided by s_j and s_j^2, and an optimality residual of b_j is s_j times that of t_j.
 */
export interface ScaledPenalty {
  /** lambda m_j mixing and lambda m_j (1 - mixing) per unit of lambda, on the solver's scale. */
  readonly absolute: Float64Array;
  readonly square: Float64Array;
  /** Limits on t_j. */
  readonly lower: Float64Array;
  readonly upper: Float64Array;
  /** Factor from a residual on the solver's scale to the one that is reported. */
  readonly reporting: Float64Array;
}

export function scaledPenalty(penalty: Penalty, design: Design): ScaledPenalty {
  const count = design.columns.length;
  const absolute = new Float64Array(count);
  const square = new Float64Array(count);
  const lower = new Float64Array(count).fill(-Infinity);
  const upper = new Float64Array(count).fill(Infinity);
  const reporting = new Float64Array(count).fill(1);
  for (const j of design.used) {
    const multiplier = penalty.multipliers ? penalty.multipliers[j] : 1;
    const s = design.scale[j];
    const unit = penalty.standardize ? 1 : s;
    absolute[j] = (multiplier * penalty.mixing) / unit;
    // Infinite for an unstandardised column of hardly any spread: such a coefficient is 0 to the last digit, unless lambda is 0.
    square[j] = (multiplier * (1 - penalty.mixing)) / unit / unit;
    if (penalty.lower) lower[j] = penalty.lower[j] * s;
    if (penalty.upper) upper[j] = penalty.upper[j] * s;
    reporting[j] = unit;
  }
  return { absolute, square, lower, upper, reporting };
}

/** lambda times a penalty's part; without lambda there is no penalty, however large its part. */
export function penaltyAt(lambda: number, part: number): number {
  return lambda === 0 ? 0 : lambda * part;
}

/** The number nearest to `value` after it has been moved towards 0 by `threshold`. */
export function softThreshold(value: number, threshold: number): number {
  if (value > threshold) return value - threshold;
  return value < -threshold ? value + threshold : 0;
}

/**
 * How far a coordinate is from optimal: the part of its (sub)gradient that points inward, 0 at the optimum.
 * @param gradient of the smooth loss for t
 * @param l1 and l2 the penalty's parts with lambda in them
 */
export function violation(t: number, gradient: number, l1: number, l2: number, lower: number, upper: number): number {
  if (t === 0) {
    // Moving up costs gradient + l1, moving down -gradient + l1; a negative cost is a way to improve.
    const up = upper > 0 ? -gradient - l1 : 0;
    const down = lower < 0 ? gradient - l1 : 0;
    return Math.max(0, up, down);
  }
  const slope = gradient + (t > 0 ? l1 : -l1) + l2 * t;
  if (t >= upper) return Math.max(0, slope);
  if (t <= lower) return Math.max(0, -slope);
  return Math.abs(slope);
}
