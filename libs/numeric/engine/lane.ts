import { violation } from '../penalised/penalty';
import type { Standardisation } from './standardisation';

/** Where a curvature is taken. */
export type Coordinates = Pick<Point, 'intercept' | 't'>;

/** A model at one point: coordinates, and what a pass found there. */
export interface Point {
  intercept: number;
  readonly t: Float64Array;
  /** Of the mean loss. */
  gradientOfIntercept: number;
  readonly gradient: Float64Array;
  /** Mean loss over the lane's rows; NaN where a pass does not sum it. */
  loss: number;
}

export function pointOf(columns: number): Point {
  return { intercept: 0, t: new Float64Array(columns), gradientOfIntercept: 0, gradient: new Float64Array(columns), loss: NaN };
}

export function copyPoint(from: Point, to: Point): void {
  to.intercept = from.intercept;
  to.t.set(from.t);
  to.gradientOfIntercept = from.gradientOfIntercept;
  to.gradient.set(from.gradient);
  to.loss = from.loss;
}

/** What a pass computes a lane with. */
export interface Lane {
  readonly point: Point;
  readonly standardisation: Standardisation;
  /** Fold that is left out, -1 = none. */
  readonly leftOut: number;
  /** Sum of w loss over the fold that is left out, from the last pass. */
  heldOut: number;
  /** Gradient of the mean loss over that fold, the intercept's part first, where it is wanted. */
  readonly heldOutGradient?: Float64Array;
}

/** Largest violation of the optimality conditions at a point, as it is reported: for columns that are scaled and not centred. */
export function residualAt(point: Point, s: Standardisation, lambda: number): number {
  const g0 = point.gradientOfIntercept;
  let largest = Math.abs(g0);
  for (let j = 0; j < s.used.length; j++) {
    if (s.used[j] === 0) continue;
    const gradient = point.gradient[j] + (s.centre[j] / s.scale[j]) * g0;
    const amount =
      violation(point.t[j], gradient, lambda * s.absolute[j], lambda * s.square[j], s.lower[j], s.upper[j]) * s.reporting[j];
    if (!(amount <= largest)) largest = amount;
  }
  return largest;
}

/** Penalty at a point. */
export function penaltyAt(point: Point, s: Standardisation, lambda: number): number {
  let sum = 0;
  for (let j = 0; j < s.used.length; j++) {
    const t = point.t[j];
    if (t !== 0) sum += s.absolute[j] * Math.abs(t) + (s.square[j] / 2) * t * t;
  }
  return lambda * sum;
}

/** Derivative of the objective at `to` along the step from `from`: positive when the step went too far. */
export function slopeAlong(at: Point, from: Point, to: Point, s: Standardisation, lambda: number): number {
  let slope = at.gradientOfIntercept * (to.intercept - from.intercept);
  for (let j = 0; j < s.used.length; j++) {
    const step = to.t[j] - from.t[j];
    if (step === 0) continue;
    const t = at.t[j];
    const sign = t !== 0 ? Math.sign(t) : at === from ? Math.sign(step) : -Math.sign(step);
    slope += (at.gradient[j] + lambda * (s.absolute[j] * sign + s.square[j] * t)) * step;
  }
  return slope;
}
