import { requireFinite, requireThat } from '../checks';

export interface Scaling {
  /** Points that double the odds. */
  readonly pointsToDouble: number;
  readonly baseScore: number;
  /** Odds good:bad at the base score. */
  readonly baseOdds: number;
  /** "spread": the base points are shared equally by the characteristics; "base": they stand alone. */
  readonly intercept: 'spread' | 'base';
  readonly rounding: 'nearest';
}

export interface ScaledTerm {
  readonly coefficient: number;
  /** Weight of evidence of each bin. */
  readonly woe: ArrayLike<number>;
}

export interface Points {
  readonly factor: number;
  readonly offset: number;
  /** Offset + Factor x intercept, whichever form. */
  readonly basePoints: number;
  /** Points of each bin of each characteristic; in the spread form with its share of the base points. */
  readonly points: number[][];
  readonly pointsRounded: number[][];
  readonly basePointsRounded: number;
  /** The form used: "spread" falls back to "base" when no characteristic is kept. */
  readonly form: 'spread' | 'base';
  /** Points of a bin with WOE 0 in each characteristic: the neutral points. */
  readonly neutral: number[];
}

/** Nearest integer, halves away from zero, never -0. @example roundAwayFromZero(-2.5) // -3 */
export function roundAwayFromZero(value: number): number {
  const rounded = Math.sign(value) * Math.round(Math.abs(value));
  return rounded === 0 ? 0 : rounded;
}

/**
 * Factor = PDO / ln 2: points per unit of ln(good:bad).
 * @param pointsToDouble points that double the odds, above 0
 * @throws NumericError for a PDO that is not positive and finite
 * @example scaleFactor(20) // 28.8539
 * Source: as `scaleToPoints`.
 */
export function scaleFactor(pointsToDouble: number): number {
  requireThat(
    pointsToDouble > 0 && pointsToDouble < Infinity,
    'pointsToDouble',
    `points to double the odds are ${pointsToDouble}; they must be above 0.`,
  );
  return pointsToDouble / Math.LN2;
}

/**
 * Points of a scorecard: score = Offset + Factor x eta with eta = ln(good:bad).
 *
 * Base form: base points Offset + Factor b0, bin points Factor b_j WOE_ij. Spread form: (Offset + Factor b0)/k is added to the bins of each of
 * the k characteristics kept. Rounding takes each value to the nearest integer, halves away from zero; scores are then sums.
 *
 * @param scaling PDO, base score (points), base odds (good:bad), form and rounding
 * @param fit intercept and the terms kept, on the scale of ln(good:bad); leave out characteristics that are not kept
 * @throws NumericError for a PDO or base odds that are not positive, or NaN
 * @example scaleToPoints({ pointsToDouble: 20, baseScore: 600, baseOdds: 50, intercept: 'base', rounding: 'nearest' },
 *   { intercept: 1, terms: [{ coefficient: 1, woe: [0.5] }] }).offset // 487.1229
 * Source: common practice in the trade; the algebra is the affine map with score(base odds) = base score and PDO points per ln 2.
 */
export function scaleToPoints(scaling: Scaling, fit: { intercept: number; terms: readonly ScaledTerm[] }): Points {
  requireFinite('scaling', [scaling.pointsToDouble, scaling.baseScore, scaling.baseOdds]);
  requireThat(scaling.pointsToDouble > 0, 'pointsToDouble', 'points to double the odds must be above 0.');
  requireThat(scaling.baseOdds > 0, 'baseOdds', 'base odds must be above 0.');
  requireFinite('intercept', [fit.intercept]);
  const factor = scaleFactor(scaling.pointsToDouble);
  const offset = scaling.baseScore - factor * Math.log(scaling.baseOdds);
  const basePoints = offset + factor * fit.intercept;
  const form = scaling.intercept === 'spread' && fit.terms.length > 0 ? 'spread' : 'base';
  const share = form === 'spread' ? basePoints / fit.terms.length : 0;
  const points = fit.terms.map(({ coefficient, woe }, j) => {
    requireFinite(`term ${j}`, [coefficient]);
    requireFinite(`woe of term ${j}`, woe);
    return Array.from(woe, (value) => share + factor * coefficient * value);
  });
  return {
    factor,
    offset,
    basePoints,
    points,
    pointsRounded: points.map((bins) => bins.map(roundAwayFromZero)),
    basePointsRounded: form === 'spread' ? 0 : roundAwayFromZero(basePoints),
    form,
    neutral: fit.terms.map(() => share),
  };
}
