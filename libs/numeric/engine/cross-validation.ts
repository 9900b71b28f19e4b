import { summarise, type CrossValidation, type FoldResult } from '../penalised/folds';
import type { CodedProblem } from './coded-columns';
import { FoldSheet, type FoldBatch } from './fold-batch';
import { follow, type Follower } from './follow';
import { pointOf, type Point } from './lane';
import { LANES_SINGLE, type Layout } from './layout';
import { LeftOutRows } from './left-out';
import type { Passes } from './passes';
import { fromTables, ownStandardisation, weightSums, type Standardisation } from './standardisation';

/** Largest optimality residual of path points and folds unless another is asked for. */
export const PATH_TOLERANCE = 1e-6;

/**
 * Share of the tolerance that folds are asked for. Of few rows, what a fold that is left out misses weighs more, and their sums are exact enough to ask for
 * less; where each has a curvature of its own, the model's last step takes away what is left.
 */
const FOLD_SHARE = 0.9;
const FOLD_SHARE_OF_FEW = 0.3;

/**
 * Below so many rows for each column a fold is followed with a curvature of its own. To take one costs about what three passes of five folds do (1,000 x 60): of
 * more rows, where a fold lies near to all rows, it would not be worth it.
 */
const OWN_CURVATURE_ROWS = 40;

export interface EngineFolds {
  readonly tolerance?: number;
  /** Values by code of each column in a fold (number from 1), computed from its training rows; null = those of the problem. */
  readonly valuesForFold?: (fold: number) => readonly ArrayLike<number>[] | null;
  readonly onFold?: (done: number, count: number) => void;
  /** Share of the work done, after every pass. */
  readonly onProgress?: (share: number) => void;
  readonly onFoldFit?: (
    fold: number,
    index: number,
    fit: { intercept: number; coefficients: Float64Array; optimalityResidual: number },
  ) => void;
}

/** Folds `first` to `end - 1` (from 0) that are followed together. */
export interface FollowedFolds {
  readonly guide: readonly Point[];
  readonly lambdas: readonly number[];
  readonly first: number;
  readonly end: number;
  readonly tolerance: number;
  /** Values by code of each column in a fold; null = those of the problem. */
  readonly valuesFor: (fold: number) => readonly ArrayLike<number>[] | null;
}

export interface FoldArrival {
  /** From 0. */
  readonly fold: number;
  readonly place: number;
  /** Mean deviance over the fold. */
  readonly deviance: number;
  readonly residual: number;
  readonly fit: () => { intercept: number; coefficients: Float64Array };
}

export interface FoldEvents {
  readonly onArrival: (arrival: FoldArrival) => void;
  /** A fold was given up at a place. */
  readonly onFailure: (fold: number, place: number) => void;
  /** Share of the work that is done, after every pass; it may throw to stop. */
  readonly onPass?: (share: number) => void;
}

const hasOwnCurvatures = ({ isWhole, byRow, rows, columns }: Layout): boolean =>
  isWhole && byRow && rows < OWN_CURVATURE_ROWS * columns.length;

/** Where no fit was asked for. */
const none = { intercept: NaN, coefficients: new Float64Array(0) };

/** Folds that did not converge have no deviances: `null`. */
export interface EngineCrossValidation {
  readonly folds: readonly (FoldResult | null)[];
  readonly optimalityResidual: number;
}

/** What folds are followed on. */
export interface FoldGround {
  readonly problem: CodedProblem;
  /** Fold of each row from 1. */
  readonly folds?: Uint8Array;
  readonly layout: Layout;
  readonly passes: Passes;
  readonly full: Standardisation;
  /** Sends folds to another thread. */
  readonly delegate?: (batch: FoldBatch) => void;
  /** On the scale of x, in the problem's order. */
  readonly unscaled: (point: Point, s: Standardisation) => { intercept: number; coefficients: Float64Array };
}

/** The folds of one problem, followed along the path of all rows. */
export class FoldsAlong {
  constructor(private readonly ground: FoldGround) {}

  /**
   * Folds at exactly the given lambdas, several at once; of few rows, half of the folds by another thread where there is one.
   * @param guide all rows' solutions at the lambdas, with gradients
   */
  crossValidate(guide: readonly Point[], lambdas: readonly number[], options: EngineFolds = {}): EngineCrossValidation {
    const { layout } = this.ground;
    const count = layout.folds;
    const share = layout.isWhole && !hasOwnCurvatures(layout) ? FOLD_SHARE_OF_FEW : FOLD_SHARE;
    const tolerance = share * Math.max(PATH_TOLERANCE, options.tolerance ?? PATH_TOLERANCE);
    const deviances = Array.from({ length: count }, () => new Float64Array(lambdas.length));
    const failed = new Uint8Array(count);
    let optimalityResidual = 0;
    let finished = 0;
    const valuesFor = (fold: number) => options.valuesForFold?.(fold + 1) ?? null;
    const arrive = ({ fold, place, deviance, residual, fit }: FoldArrival): void => {
      deviances[fold][place] = deviance;
      optimalityResidual = Math.max(optimalityResidual, residual);
      options.onFoldFit?.(fold + 1, place, { ...fit(), optimalityResidual: residual });
      if (place === lambdas.length - 1) options.onFold?.(++finished, count);
    };
    const fail = (fold: number): void => void (failed[fold] = 1);
    const own = (first: number, end: number): void => {
      for (let from = first; from < end; from += LANES_SINGLE) {
        const to = Math.min(end, from + LANES_SINGLE);
        this.followBatch(
          { guide, lambdas, first: from, end: to, tolerance, valuesFor },
          {
            onArrival: arrive,
            onFailure: fail,
            onPass: (share) => options.onProgress?.((from + share * (to - from)) / count),
          },
        );
      }
    };
    const half = Math.ceil(count / 2);
    const collect = this.delegate(
      { guide, lambdas, first: half, end: count, tolerance, valuesFor },
      options.onFoldFit !== undefined,
    );
    own(0, collect ? half : count);
    if (collect && !collect(arrive, fail)) own(half, count);
    const folds = deviances.map((deviance, fold) =>
      failed[fold] !== 0 ? null : { fold: fold + 1, weight: layout.foldWeights[fold], deviance: Array.from(deviance) },
    );
    return { folds, optimalityResidual };
  }

  /**
   * Offers folds to another thread. Only where curvatures are of all rows does a fold not depend on those it is followed beside, and only then may it be
   * followed elsewhere.
   * @returns takes what was found, false when nobody did it; null when nobody was asked
   */
  private delegate(
    folds: FollowedFolds,
    withFits: boolean,
  ): ((arrive: (arrival: FoldArrival) => void, fail: (fold: number) => void) => boolean) | null {
    const { layout, problem, folds: foldOfRow, delegate: send } = this.ground;
    const { first, end, lambdas, guide, tolerance, valuesFor } = folds;
    if (!send || !foldOfRow || first >= end || !layout.isWhole) return null;
    const columns = withFits ? problem.columns.length : 0;
    const sheet = new FoldSheet(
      new SharedArrayBuffer(FoldSheet.bytes(end - first, lambdas.length, columns)),
      lambdas.length,
      columns,
    );
    const values = Array.from({ length: end - first }, (_, k) => valuesFor(first + k));
    const batch = { problem, folds: foldOfRow, lambdas, guide, tolerance, values, first, end, withFits };
    send({ ...batch, sheet: sheet.buffer });
    return (arrive, fail) => {
      if (!sheet.collect()) return false;
      for (let fold = first; fold < end; fold++) {
        for (let place = 0; place < lambdas.length; place++) {
          const { deviance, residual, fit } = sheet.read(fold - first, place);
          if (Number.isNaN(deviance)) {
            fail(fold);
            break;
          }
          arrive({ fold, place, deviance, residual, fit: () => fit ?? none });
        }
      }
      return true;
    };
  }

  /** Follows at most 16 folds along the guide together. */
  followBatch(folds: FollowedFolds, told: FoldEvents): void {
    const { layout, problem, full, passes, unscaled } = this.ground;
    const { first, end, lambdas, guide, tolerance, valuesFor } = folds;
    const size = layout.columns.length;
    const followers = Array.from({ length: end - first }, (_, k): Follower => {
      const fold = first + k;
      const sums = weightSums(layout, (other) => other !== fold);
      const own = valuesFor(fold);
      const standardisation = own
        ? fromTables(problem, layout, sums, (source) => own[source])
        : ownStandardisation(problem, layout, full, sums);
      return {
        point: pointOf(size),
        standardisation,
        leftOut: fold,
        heldOut: 0,
        ...(!layout.byRow && { heldOutGradient: new Float64Array(size + 1) }),
        place: 0,
        passes: 0,
        failed: false,
      };
    });
    const leftOut = layout.byRow ? followers.map(({ leftOut: fold }) => new LeftOutRows(problem, layout, fold)) : [];
    if (layout.byRow) passes.leaveOut(followers.map(({ leftOut }) => leftOut));
    follow(passes, followers, {
      guide,
      full,
      lambdas,
      tolerance,
      counted: layout.byRow,
      ownCurvature: hasOwnCurvatures(layout),
      ...(layout.byRow && {
        lossLeftOut: (lane: number, at: Point) => leftOut[lane].meanLoss(at, followers[lane].standardisation),
      }),
      onPass: () => {
        const places = followers.reduce((sum, { place }) => sum + place, 0);
        told.onPass?.(places / (followers.length * lambdas.length));
      },
      onArrival: (lane, place, residual, heldOut) =>
        told.onArrival({
          fold: first + lane,
          place,
          deviance: 2 * heldOut,
          residual,
          fit: () => unscaled(followers[lane].point, followers[lane].standardisation),
        }),
    });
    followers.forEach((follower, k) => follower.failed && told.onFailure(first + k, follower.place));
  }
}

/**
 * The folds' summary, as `crossValidate` gives it.
 * @param lambdas those that the folds were followed along
 * @returns null while a fold is missing, because the engine gave it up
 * @example summariseFolds([0.1, 0.05], { folds: [1, 2].map((fold) => ({ fold, weight: 1, deviance: [1.2, 1.1] })), optimalityResidual: 1e-7 }).minimum // 1
 */
export function summariseFolds(lambdas: readonly number[], result: EngineCrossValidation): CrossValidation | null {
  const folds = result.folds.flatMap((fold) => (fold ? [fold] : []));
  if (folds.length < result.folds.length) return null;
  return { ...summarise(lambdas, folds), optimalityResidual: result.optimalityResidual, converged: true };
}
