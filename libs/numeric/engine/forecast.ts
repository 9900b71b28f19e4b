import type { Curvature } from './curvature';
import type { Point } from './lane';

/**
 * The gradient that a quadratic model foretells for the end of a step, the intercept's part first.
 * @param from point with its gradient
 * @param shift added to the gradient, or null
 * @param result gets m + 1 values
 */
export function foretell(curvature: Curvature, from: Point, to: Point, shift: Float64Array | null, result: Float64Array): void {
  const { gram, size } = curvature;
  const width = size + 1;
  result[0] = from.gradientOfIntercept;
  result.set(from.gradient, 1);
  if (shift) for (let k = 0; k < width; k++) result[k] += shift[k];
  const add = (row: number, step: number): void => {
    if (step === 0) return;
    const start = row * width;
    for (let k = 0; k < width; k++) result[k] += step * gram[start + k];
  };
  add(0, to.intercept - from.intercept);
  for (let j = 0; j < size; j++) add(j + 1, to.t[j] - from.t[j]);
}

/** What the model misses of a guide's own step, the intercept's part first: all but the same for whoever takes that step beside the guide. */
export function missedOfStep(curvature: Curvature, from: Point, to: Point): Float64Array {
  const missed = new Float64Array(curvature.size + 1);
  foretell(curvature, from, to, null, missed);
  missed[0] = to.gradientOfIntercept - missed[0];
  for (let j = 0; j < curvature.size; j++) missed[j + 1] = to.gradient[j] - missed[j + 1];
  return missed;
}
