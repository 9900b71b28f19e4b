import type { Passes } from './passes';
import type { Standardisation } from './standardisation';

interface PointLike {
  readonly intercept: number;
  readonly t: Float64Array;
}

/** Places that one large sample serves on either side, and places that are kept behind. */
const ANCHORED = 8;
const KEPT = 12;

/** The curvature of a lane's quadratic model: a weighted Gram matrix with the intercept eliminated. */
export interface Curvature {
  /** Number of columns. */
  readonly size: number;
  /** (m + 1) x (m + 1), the intercept first. */
  readonly gram: Float64Array;
  /** m x m. */
  readonly hessian: Float64Array;
}

/** Keeps exactly collinear columns from making a set of coordinates singular; the exact gradient decides, so only speed is at stake. */
const FAINT = 1e-7;

/**
 * @param gram (m + 1) x (m + 1), the intercept first
 * @param factor by which the matrix is multiplied: total weight of all rows over that of the lane's
 */
export function curvatureOf(gram: Float64Array, size: number, factor = 1): Curvature {
  const width = size + 1;
  const scaled = factor === 1 ? gram : gram.map((value) => value * factor);
  const hessian = new Float64Array(size * size);
  for (let a = 0; a < size; a++) {
    const ratio = scaled[(a + 1) * width] / scaled[0];
    for (let b = 0; b < size; b++) hessian[a * size + b] = scaled[(a + 1) * width + b + 1] - ratio * scaled[b + 1];
    hessian[a * size + a] *= 1 + FAINT;
  }
  return { size, gram: scaled, hessian };
}

/**
 * Curvatures along a path: taken from the large sample now and then, and from there on changed by the difference of two small samples.
 */
export class CurvaturesAlong {
  private anchor: { place: number; large: Float64Array[]; small: Float64Array[] } | null = null;
  private readonly kept = new Map<number, Float64Array[]>();

  /** @param pointAt where the curvature of a place is taken */
  constructor(
    private readonly passes: Passes,
    private readonly standardisation: Standardisation,
    private readonly pointAt: (place: number) => PointLike,
  ) {}

  /** Gram matrices by fold at a place. */
  gramsAt(place: number): Float64Array[] {
    const known = this.kept.get(place);
    if (known) return known;
    const { passes, standardisation, pointAt } = this;
    const { large, small } = passes.layout.gramUnits;
    let grams: Float64Array[];
    if (large.units === small.units) grams = passes.gram(pointAt(place), standardisation);
    else {
      if (!this.anchor || Math.abs(place - this.anchor.place) > ANCHORED) {
        const point = pointAt(place + ANCHORED);
        this.anchor = {
          place: place + ANCHORED,
          large: passes.gram(point, standardisation, 'large'),
          small: passes.gram(point, standardisation, 'small'),
        };
      }
      const { anchor } = this;
      grams = passes.gram(pointAt(place), standardisation, 'small');
      grams.forEach((gram, fold) => {
        for (let k = 0; k < gram.length; k++) gram[k] += anchor.large[fold][k] - anchor.small[fold][k];
      });
    }
    this.kept.set(place, grams);
    for (const other of this.kept.keys()) if (other < place - KEPT) this.kept.delete(other);
    return grams;
  }
}

/** Sum of some of the grams, without one: what a fold's training rows have. */
export function sumOfGrams(grams: readonly Float64Array[], without: number): Float64Array {
  const sum = new Float64Array(grams[0].length);
  grams.forEach((gram, fold) => {
    if (fold === without) return;
    for (let k = 0; k < sum.length; k++) sum[k] += gram[k];
  });
  return sum;
}
