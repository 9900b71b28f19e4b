import { rowLoss } from '../penalised/loss';
import { automaticGrid, type FitOptions } from '../penalised/path';
import { violation } from '../penalised/penalty';
import type { Fit, Grid, Path } from '../penalised/problem';
import { requireLambda } from '../penalised/validation';
import type { CodedColumn, CodedProblem } from './coded-columns';
import { Alone, type Crew } from './crew';
import { FoldsAlong, PATH_TOLERANCE, type EngineCrossValidation, type EngineFolds } from './cross-validation';
import { follow, type Follower } from './follow';
import type { KernelKind } from './kernels/kernels';
import { copyPoint, pointOf, residualAt, type Lane, type Point } from './lane';
import { layOut, LANES_SINGLE, type Layout, type LayoutOptions } from './layout';
import { Passes, type Precision } from './passes';
import { drawStratified, strataOf } from '../resampling/bootstrap';
import { fullStandardisation, ownStandardisation, weightSums, type Standardisation } from './standardisation';
import { solvePath, type Solved, type Target } from './wavefront';

/** What singles are asked for: their rounding adds some 1e-7 to the residual. */
const SINGLE_TOLERANCE = 9e-7;

/** Where doubles prove a point, singles stop that many times above what is asked for: the model's next step, which needs no pass, takes a point the rest of the way. */
const SINGLES_STOP = 5;

/** Neighbouring lambdas on the way to a cold one. */
const APPROACH_RATIO = 0.5;
const BATCH = 8;

export interface EngineOptions {
  /** Fold of each row from 1; absent = none. */
  readonly folds?: Uint8Array;
  readonly crew?: Crew;
  readonly kernels?: KernelKind;
  readonly counted?: boolean;
}

/**
 * The fast solver for one problem: laid out once, then asked for paths, folds and single fits. Definitions are those of `penalised/`; every reported fit
 * carries the residual of its exact gradient in double precision.
 * @example new Engine({ columns: codedColumns(columns), outcome, penalty }).path({ count: 100, smallestRatio: 1e-4, earlyStop: true })
 */
export class Engine {
  readonly layout: Layout;
  readonly passes: Passes;
  readonly full: Standardisation;
  readonly folds: FoldsAlong;
  private guide: { lambdas: readonly number[]; points: readonly Point[] } | null = null;
  private begun: Point | null = null;

  constructor(
    readonly problem: CodedProblem,
    private readonly options: EngineOptions = {},
    earlier?: LayoutOptions['earlier'],
  ) {
    const { crew = new Alone() } = options;
    this.layout = layOut(problem, {
      ...(options.folds ? { folds: options.folds.map((fold) => fold - 1) } : {}),
      kernels: options.kernels,
      workers: 1 + crew.helpers,
      counted: options.counted,
      earlier,
    });
    this.passes = new Passes(this.layout, crew);
    this.full = fullStandardisation(problem, this.layout);
    this.folds = new FoldsAlong({
      problem,
      folds: options.folds,
      layout: this.layout,
      passes: this.passes,
      full: this.full,
      delegate: crew.delegate,
      unscaled: (point, s) => this.unscaled(point, s),
    });
  }

  /** Lets the crew go. */
  close(): void {
    this.passes.close();
  }

  /**
   * An engine for the same rows with another column in place of one: what does not change is taken over, so that a changed bin costs little. This
   * one is closed by it.
   * @example engine.withColumn(3, { kind: 'coded', codes, values }).fitAt(lambda, { start })
   */
  withColumn(place: number, column: CodedColumn): Engine {
    const columns = this.problem.columns.map((own, j) => (j === place ? column : own));
    this.close();
    if (this.problem.columns[place].kind !== 'coded') return new Engine({ ...this.problem, columns }, this.options);
    return new Engine({ ...this.problem, columns }, this.options, { layout: this.layout, changed: [place] });
  }

  /** The fit of intercept and unpenalised columns, with the gradient of all. */
  private begin(): Point {
    if (this.begun) return this.begun;
    const { full, layout, problem, passes } = this;
    const size = layout.columns.length;
    const point = pointOf(size);
    let good = 0;
    let total = 0;
    for (const i of layout.order) {
      const w = problem.weights ? problem.weights[i] : 1;
      total += w;
      good += w * problem.outcome[i];
    }
    point.intercept = Math.log(good / (total - good));
    const free = full.used.map((used, j) => (used && full.absolute[j] + full.square[j] === 0 ? 1 : 0));
    const lane = { point, standardisation: full, leftOut: -1, heldOut: 0 };
    passes.run([lane], 'double');
    if (problem.offset || free.includes(1)) {
      const restricted = { ...full, used: free };
      solvePath(passes, point, [{ lambda: 0, tolerance: 1e-12 }], {
        precision: 'double',
        standardisation: restricted,
        lanes: 1,
        onSolved: (solved) => {
          copyPoint(solved.point, point);
          return true;
        },
      });
      passes.run([lane], 'double');
    }
    return (this.begun = point);
  }

  /** Largest lambda, as `largestLambda` defines it. */
  largestLambda(): number {
    const point = this.begin();
    const { full } = this;
    let largest = 0;
    for (let j = 0; j < full.used.length; j++) {
      if (full.used[j] === 0 || full.multipliers[j] === 0) continue;
      const inward = violation(0, point.gradient[j], 0, 0, full.lower[j], full.upper[j]) * full.reporting[j];
      largest = Math.max(largest, inward / full.multipliers[j] / Math.max(this.problem.penalty.mixing, 0.001));
    }
    return largest;
  }

  nullDeviance(): number {
    const { layout, problem } = this;
    let good = 0;
    let total = 0;
    for (const i of layout.order) {
      const w = problem.weights ? problem.weights[i] : 1;
      total += w;
      good += w * problem.outcome[i];
    }
    const intercept = Math.log(good / (total - good));
    if (!problem.offset) return 2 * (good * rowLoss(intercept, 1) + (total - good) * rowLoss(intercept, 0));
    const point = pointOf(layout.columns.length);
    point.intercept = intercept;
    const none = { ...this.full, used: new Uint8Array(this.full.used.length) };
    let loss = NaN;
    this.passes.run([{ point, standardisation: none, leftOut: -1, heldOut: 0 }], 'double');
    solvePath(this.passes, point, [{ lambda: 0, tolerance: 1e-12 }], {
      precision: 'double',
      standardisation: none,
      lanes: 1,
      onSolved: (solved) => {
        loss = solved.point.loss;
        return true;
      },
    });
    return 2 * total * loss;
  }

  /** As `fitPath`. Singles find the points, doubles prove and finish them. */
  path(grid: Grid, options: FitOptions & { readonly onFit?: (fit: Fit, index: number, count: number) => void } = {}): Path {
    const start = this.begin();
    const largest = this.largestLambda();
    const automatic = !('lambdas' in grid);
    const lambdas = automatic ? automaticGrid(largest, grid.count, grid.smallestRatio) : Array.from(grid.lambdas);
    lambdas.forEach(requireLambda);
    const nullDeviance = this.nullDeviance();
    const tolerance = options.tolerance ?? PATH_TOLERANCE;
    const fits: Fit[] = [];
    const points: Point[] = [];
    let stoppedBecause: Path['stoppedBecause'];
    const report = (solved: Solved): boolean => {
      const index = fits.length;
      const fit = this.fitOf(solved);
      fits.push(fit);
      points.push(solved.point);
      options.onFit?.(fit, index, lambdas.length);
      if (!automatic || !grid.earlyStop || index === 0) return false;
      const explained = 1 - fit.deviance / nullDeviance;
      const gain = (fits[index - 1].deviance - fit.deviance) / nullDeviance;
      if (index === lambdas.length - 1) return true;
      if (explained > 0.999) stoppedBecause = 'explained';
      else if (index >= 4 && gain < 1e-5) stoppedBecause = 'little-gain';
      return stoppedBecause !== undefined;
    };
    this.solve(start, lambdas, tolerance, report);
    this.guide = { lambdas: fits.map(({ lambda }) => lambda), points };
    const told = { fits, nullDeviance, largestLambda: largest, stoppedEarly: stoppedBecause !== undefined };
    return stoppedBecause ? { ...told, stoppedBecause } : told;
  }

  /** Singles along the path, and every few solved lambdas doubles for these; `report` returns true to stop. */
  private solve(start: Point, lambdas: readonly number[], tolerance: number, report: (solved: Solved) => boolean): void {
    const approach = this.approach(lambdas[0]);
    const single = Math.max(SINGLE_TOLERANCE, Math.min(tolerance, PATH_TOLERANCE) * 0.9);
    const targets: Target[] = [
      ...approach.map((lambda) => ({ lambda, tolerance: Math.max(1e-2 * lambda, single) })),
      ...lambdas.map((lambda) => ({ lambda, tolerance: SINGLES_STOP * single })),
    ];
    let batch: Solved[] = [];
    let before = start;
    solvePath(this.passes, start, targets, {
      precision: 'single',
      standardisation: this.full,
      ahead: true,
      onSolved: (solved, place) => {
        if (place < approach.length) return false;
        batch.push(solved);
        if (batch.length < BATCH && place < targets.length - 1) return false;
        let stop = false;
        const proofs = batch.map(({ lambda, point, ahead = point }) => ({ lambda, tolerance, from: ahead }));
        const found = batch;
        batch = [];
        solvePath(this.passes, before, proofs, {
          precision: 'double',
          standardisation: this.full,
          onSolved: (proved, k) => {
            before = proved.point;
            return (stop = report({ ...proved, passes: proved.passes + found[k].passes }));
          },
        });
        return stop;
      },
    });
  }

  /** Lambdas on the way from the largest to a first one that lies far below. */
  private approach(first: number): number[] {
    const largest = this.largestLambda();
    const lambdas: number[] = [];
    const last = first > 0 ? first / APPROACH_RATIO : largest * 1e-3;
    for (let lambda = largest * APPROACH_RATIO; lambda >= last && lambda > 0; lambda *= APPROACH_RATIO) lambdas.push(lambda);
    return lambdas;
  }

  /** As `fitAt`, started from a fit if there is one. */
  fitAt(
    lambda: number,
    options: FitOptions & { readonly start?: { intercept: number; coefficients: ArrayLike<number> } } = {},
  ): Fit {
    requireLambda(lambda);
    const tolerance = options.tolerance ?? 1e-9;
    let found: Solved | null = null;
    if (options.start) {
      const point = this.pointFrom(options.start);
      solvePath(this.passes, null, [{ lambda, tolerance, from: point }], {
        precision: 'double',
        standardisation: this.full,
        lanes: 1,
        onSolved: (solved) => {
          found = solved;
          return true;
        },
      });
    } else {
      this.solve(this.begin(), [lambda], tolerance, (solved) => {
        found = solved;
        return true;
      });
    }
    return this.fitOf(found as unknown as Solved);
  }

  private pointFrom(start: { intercept: number; coefficients: ArrayLike<number> }): Point {
    const { full, layout } = this;
    const point = pointOf(layout.columns.length);
    point.intercept = start.intercept;
    layout.columns.forEach(({ source }, j) => {
      if (full.used[j] === 0) return;
      point.t[j] = Math.min(full.upper[j], Math.max(full.lower[j], start.coefficients[source] * full.scale[j]));
      point.intercept += (point.t[j] / full.scale[j]) * full.centre[j];
    });
    return point;
  }

  /** On the scale of x, in the problem's order. */
  private unscaled(point: Point, s: Standardisation): { intercept: number; coefficients: Float64Array } {
    const coefficients = new Float64Array(this.problem.columns.length);
    let { intercept } = point;
    this.layout.columns.forEach(({ source }, j) => {
      if (point.t[j] === 0) return;
      coefficients[source] = point.t[j] / s.scale[j];
      intercept -= coefficients[source] * s.centre[j];
    });
    return { intercept, coefficients };
  }

  private fitOf(solved: Solved): Fit {
    const { full } = this;
    return {
      lambda: solved.lambda,
      ...this.unscaled(solved.point, full),
      objective: solved.objective,
      deviance: 2 * full.totalWeight * solved.point.loss,
      optimalityResidual: solved.residual,
      iterations: solved.passes,
      status: solved.converged ? 'converged' : 'iteration-limit',
    };
  }

  /** All rows' solutions at the lambdas, with gradients: those of the last path, or found in singles. */
  private guideTo(lambdas: readonly number[]): readonly Point[] {
    const known = this.guide;
    if (known && lambdas.length <= known.lambdas.length && lambdas.every((lambda, k) => lambda === known.lambdas[k]))
      return known.points;
    const points: Point[] = [];
    const approach = this.approach(lambdas[0]);
    const targets = [...approach, ...lambdas].map((lambda) => ({ lambda, tolerance: SINGLE_TOLERANCE }));
    solvePath(this.passes, this.begin(), targets, {
      precision: 'single',
      standardisation: this.full,
      onSolved: ({ point }, place) => {
        if (place >= approach.length) points.push(point);
        return false;
      },
    });
    this.guide = { lambdas: [...lambdas], points };
    return points;
  }

  /** Takes fits of all rows that were found before as the guide of `crossValidate`. */
  followFits(fits: readonly Fit[]): void {
    const lanes = fits.map((fit): Lane => ({ point: this.pointFrom(fit), standardisation: this.full, leftOut: -1, heldOut: 0 }));
    for (let first = 0; first < lanes.length; first += LANES_SINGLE)
      this.passes.run(lanes.slice(first, first + LANES_SINGLE), 'single');
    this.guide = { lambdas: fits.map(({ lambda }) => lambda), points: lanes.map(({ point }) => point) };
  }

  /** Folds at exactly the given lambdas, several at once; of few rows, half of the folds by another thread where the crew has one. */
  crossValidate(lambdas: readonly number[], options: EngineFolds = {}): EngineCrossValidation {
    return this.folds.crossValidate(this.guideTo(lambdas), lambdas, options);
  }

  /**
   * Stratified bootstrap resamples, each followed along the lambdas with its own standardisation, several at once.
   * @param onDraw resample and place with the fit there; `converged` is false where a resample was given up
   */
  resample(
    lambdas: readonly number[],
    options: { readonly seed: number; readonly first?: number; readonly count: number; readonly tolerance?: number },
    onDraw: (draw: {
      resample: number;
      place: number;
      intercept: number;
      coefficients: Float64Array;
      converged: boolean;
    }) => void,
  ): void {
    const { layout, problem, full, passes } = this;
    const guide = this.guideTo(lambdas);
    const size = layout.columns.length;
    const first = options.first ?? 0;
    const end = first + options.count;
    const strata = strataOf(problem.outcome);
    for (let from = first; from < end; from += LANES_SINGLE) {
      const count = Math.min(LANES_SINGLE, end - from);
      const width = Math.ceil(count / 4) * 4;
      const { counts } = passes;
      counts.fill(0);
      const totals = new Float64Array(count);
      const squares = new Float64Array(count * layout.linear);
      for (let l = 0; l < count; l++) {
        const drawn = drawStratified(strata, options.seed, from + l);
        for (let s = 0; s < layout.rows; s++) {
          const i = layout.order[s];
          const times = drawn[i];
          if (times > 255) throw new RangeError('A row is drawn more than 255 times.');
          counts[layout.slots[s] * width + l] = times;
          totals[l] += times * (problem.weights ? problem.weights[i] : 1);
        }
        for (let j = 0; j < layout.linear; j++) squares[l * layout.linear + j] = passes.linearSquares(j, l, width);
      }
      const weighed = passes.weigh(count);
      const followers = Array.from({ length: count }, (_, l): Follower => {
        const bins = Float64Array.from({ length: layout.bins }, (__, b) => weighed.bins[b * weighed.width + l]);
        const linear = Float64Array.from({ length: layout.linear * 2 }, (__, k) =>
          k % 2 === 0 ? weighed.linear[(k >> 1) * weighed.width + l] : squares[l * layout.linear + (k >> 1)],
        );
        const standardisation = ownStandardisation(problem, layout, full, { bins, linear, total: totals[l] });
        return { point: pointOf(size), standardisation, leftOut: -1, heldOut: 0, place: 0, passes: 0, failed: false };
      });
      const report = (lane: number, place: number, converged: boolean): void =>
        onDraw({
          resample: from + lane,
          place,
          ...this.unscaled(followers[lane].point, followers[lane].standardisation),
          converged,
        });
      follow(passes, followers, {
        guide,
        full,
        lambdas,
        tolerance: Math.max(SINGLE_TOLERANCE, options.tolerance ?? PATH_TOLERANCE),
        counted: true,
        onArrival: (lane, place) => report(lane, place, true),
      });
      followers.forEach((follower, lane) => follower.failed && report(lane, follower.place, false));
    }
  }

  /** Residual of points on the scale of x in double precision: what a fit found otherwise is worth. */
  residualOf(lambda: number, fit: { intercept: number; coefficients: ArrayLike<number> }, leftOutFold = 0): number {
    const { problem, layout, options } = this;
    const { folds } = options;
    if (leftOutFold > 0 && layout.byRow && folds) {
      // Doubles leave no row out by counts: the rows of the fold weigh nothing.
      const weights = Float64Array.from(folds, (fold, i) =>
        fold === leftOutFold ? 0 : problem.weights ? problem.weights[i] : 1,
      );
      return new Engine({ ...problem, weights }, { kernels: options.kernels }).residualOf(lambda, fit);
    }
    const standardisation =
      leftOutFold === 0
        ? this.full
        : ownStandardisation(
            problem,
            layout,
            this.full,
            weightSums(layout, (f) => f !== leftOutFold - 1),
          );
    const lane: Lane = { point: this.pointFrom(fit), standardisation, leftOut: leftOutFold - 1, heldOut: 0 };
    this.passes.run([lane], 'double');
    return residualAt(lane.point, standardisation, lambda);
  }
}

export type { Precision };
