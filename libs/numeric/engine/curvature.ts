import type { Coordinates } from './lane';
import type { Passes } from './passes';
import type { Standardisation } from './standardisation';

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

/** @param gram (m + 1) x (m + 1), the intercept first */
export function curvatureOf(gram: Float64Array, size: number): Curvature {
  const hessian = new Float64Array(size * size);
  eliminate(gram, size, hessian);
  return { size, gram, hessian };
}

/** Takes the intercept out of a Gram matrix. */
function eliminate(gram: Float64Array, size: number, hessian: Float64Array): void {
  const width = size + 1;
  for (let a = 0; a < size; a++) {
    const row = (a + 1) * width;
    const ratio = gram[row] / gram[0];
    const to = a * size;
    for (let b = 0; b < size; b++) hessian[to + b] = gram[row + b + 1] - ratio * gram[b + 1];
    hessian[to + a] *= 1 + FAINT;
  }
}

/** Gram matrices by fold, and their sum. */
export interface Grams {
  readonly folds: readonly Float64Array[];
  readonly total: Float64Array;
}

/** Room for the curvature of one lane, written again and again. */
export class LaneCurvature {
  private readonly gram: Float64Array;
  private readonly hessian: Float64Array;

  constructor(private readonly size: number) {
    this.gram = new Float64Array((size + 1) * (size + 1));
    this.hessian = new Float64Array(size * size);
  }

  /**
   * Of all rows but those of a fold (-1 = of all).
   * @param factor total weight of all rows over that of the lane's
   */
  take(grams: Grams, leftOut: number, factor: number): Curvature {
    const { gram, hessian, size } = this;
    const { total, folds } = grams;
    if (leftOut < 0) for (let k = 0; k < gram.length; k++) gram[k] = total[k] * factor;
    else {
      const own = folds[leftOut];
      for (let k = 0; k < gram.length; k++) gram[k] = (total[k] - own[k]) * factor;
    }
    eliminate(gram, size, hessian);
    return { size, gram, hessian };
  }

  /**
   * Of all rows but those of a fold, at a point of the lane's own.
   * @param factor as for `take`
   */
  takeAt(passes: Passes, leftOut: number, point: Coordinates, standardisation: Standardisation, factor: number): Curvature {
    const { gram, hessian, size } = this;
    passes.gramWithout(leftOut, point, standardisation, gram);
    for (let k = 0; k < gram.length; k++) gram[k] *= factor;
    eliminate(gram, size, hessian);
    return { size, gram, hessian };
  }
}

/**
 * Curvatures along a path: taken from the large sample now and then, and from there on changed by the difference of two small samples.
 */
export class CurvaturesAlong {
  private anchor: { place: number; large: Float64Array[]; small: Float64Array[] } | null = null;
  private readonly kept = new Map<number, Grams>();

  /** @param pointAt where the curvature of a place is taken */
  constructor(
    private readonly passes: Passes,
    private readonly standardisation: Standardisation,
    private readonly pointAt: (place: number) => Coordinates,
  ) {}

  /** Gram matrices by fold at a place. */
  gramsAt(place: number): Grams {
    const known = this.kept.get(place);
    if (known) return known;
    const { passes, standardisation, pointAt } = this;
    let grams: Float64Array[];
    if (passes.layout.isWhole) grams = passes.gram(pointAt(place), standardisation);
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
    const found = withTotal(grams);
    this.kept.set(place, found);
    for (const other of this.kept.keys()) if (other < place - KEPT) this.kept.delete(other);
    return found;
  }
}

export function withTotal(folds: readonly Float64Array[]): Grams {
  if (folds.length === 1) return { folds, total: folds[0] };
  const total = new Float64Array(folds[0].length);
  for (const gram of folds) for (let k = 0; k < total.length; k++) total[k] += gram[k];
  return { folds, total };
}
