import type { Point } from './lane';

/** Below, the rounding of singles shows in the change of a gradient. */
const LEAST_CHANGE = 2e-6;

/**
 * What exact gradients tell about the curvature. That of a sample of the rows misses that of all rows by about 2 sqrt(columns / rows of the sample) in its
 * worst direction; a BFGS update takes away what it misses along a step (Nocedal and Wright, Numerical Optimization, 2nd edition, equation 6.19).
 */
export class Secants {
  private readonly steps: Float64Array[] = [];
  private readonly changes: Float64Array[] = [];
  private readonly product: Float64Array;

  /** @param most steps that are remembered, the last ones */
  constructor(
    private readonly size: number,
    private readonly most: number,
  ) {
    this.product = new Float64Array(size + 1);
  }

  /**
   * Remembers a step between two points with exact gradients and makes a Gram matrix agree with it.
   * @param gram (m + 1) x (m + 1), the intercept first
   * @returns whether the step told anything
   */
  learn(gram: Float64Array, from: Point, to: Point): boolean {
    const { steps, changes, size } = this;
    const step = new Float64Array(size + 1);
    const change = new Float64Array(size + 1);
    step[0] = to.intercept - from.intercept;
    change[0] = to.gradientOfIntercept - from.gradientOfIntercept;
    let largest = Math.abs(change[0]);
    for (let j = 0; j < size; j++) {
      step[j + 1] = to.t[j] - from.t[j];
      change[j + 1] = to.gradient[j] - from.gradient[j];
      largest = Math.max(largest, Math.abs(change[j + 1]));
    }
    if (!(largest > LEAST_CHANGE)) return false;
    if (steps.length === this.most) {
      steps.shift();
      changes.shift();
    }
    steps.push(step);
    changes.push(change);
    this.update(gram, step, change);
    return true;
  }

  /** Makes another Gram matrix agree with the steps that are remembered, the last of them exactly. */
  applyTo(gram: Float64Array): void {
    this.steps.forEach((step, k) => this.update(gram, step, this.changes[k]));
  }

  private update(gram: Float64Array, step: Float64Array, change: Float64Array): void {
    const { product } = this;
    const width = step.length;
    product.fill(0);
    let told = 0;
    for (let a = 0; a < width; a++) {
      const s = step[a];
      if (s === 0) continue;
      told += s * change[a];
      const row = a * width;
      for (let b = 0; b < width; b++) product[b] += s * gram[row + b];
    }
    let known = 0;
    for (let a = 0; a < width; a++) known += step[a] * product[a];
    // The loss is convex: a change that says otherwise, or is far from what is known, is rounding or comes from far away.
    if (!(told > 0.2 * known && told < 5 * known)) return;
    for (let a = 0; a < width; a++) {
      const row = a * width;
      const up = change[a] / told;
      const down = product[a] / known;
      for (let b = 0; b < width; b++) gram[row + b] += up * change[b] - down * product[b];
    }
  }
}
